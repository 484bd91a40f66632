import type { DailyMailModel } from './daily-mail-model';
import { formatDayYear, startOfLocalDay } from '../client/format-time';
import {
  againstProduction,
  cautionWords,
  clockWords,
  factWords,
  headline,
  plain,
  ruleWords,
  situationWords,
  stretchesNote,
  stretchWords,
} from './sentences';

const WIDTH = 78;

/** The mail as plain text, in ASCII but for names; it says what the html says. */
export function dailyMailText(model: DailyMailModel): string {
  const { ran, reached } = headline(model);
  const note = stretchesNote(model);
  const situation = situationWords(model);
  const paragraphs = [
    [
      plain(`${model.plantName}, ${model.organizationName}`),
      plain(formatDayYear(startOfLocalDay(model.day, model.timeZone), model.timeZone)),
    ].join('\n'),
    wrap([ran, reached, againstProduction(model)].filter((part) => part !== null).join(' ')),
    stretchLines(model),
    note === null ? null : wrap(note),
    columns(factWords(model).map((fact) => [fact.label, `${fact.figure} ${fact.unit}`])),
    situation === null ? null : wrap(situation),
    linkLines(model),
    wrap(cautionWords(model)),
    `${wrap(ruleWords(model))}\nStop these mails: ${model.links.stop}`,
  ];
  return `${paragraphs.filter((paragraph) => paragraph !== null && paragraph !== '').join('\n\n')}\n`;
}

function stretchLines(model: DailyMailModel): string | null {
  const rows = stretchWords(model).map((each) => [plain(each.times), plain(each.largest), plain(each.warmest)]);
  if (rows.length === 0) return null;
  return columns([['reverse', 'largest', 'warmest supply'], ...rows], [1]);
}

function linkLines(model: DailyMailModel): string {
  const { links } = model;
  const lines: [string, string][] = [
    ['Acknowledge:', links.acknowledge],
    ['With a note:', links.acknowledgeWithNote],
  ];
  if (links.worstHour !== null && model.worstHourMs !== null)
    lines.push([`The worst hour, ${clockWords(model.worstHourMs, model.timeZone)}:`, links.worstHour]);
  const width = Math.max(...lines.map(([label]) => label.length));
  return lines.map(([label, link]) => `${label.padEnd(width)}  ${link}`).join('\n');
}

/** Columns two spaces apart and two in from the margin; those named in `right` are flush right. */
function columns(rows: readonly (readonly string[])[], right: readonly number[] = []): string {
  const widths = rows.reduce<number[]>((most, row) => row.map((cell, at) => Math.max(most[at] ?? 0, cell.length)), []);
  const cellText = (cell: string, at: number) => {
    const width = widths[at] ?? 0;
    return right.includes(at) ? cell.padStart(width) : cell.padEnd(width);
  };
  return rows.map((row) => `  ${row.map(cellText).join('   ')}`.trimEnd()).join('\n');
}

/** Breaks words into lines of at most WIDTH characters; a longer word keeps a line of its own. */
function wrap(words: string): string {
  const lines: string[] = [];
  for (const word of plain(words).split(' ')) {
    const last = lines.at(-1);
    if (last !== undefined && last.length + 1 + word.length <= WIDTH) lines[lines.length - 1] = `${last} ${word}`;
    else lines.push(word);
  }
  return lines.join('\n');
}
