import { describe, expect, it } from 'vitest';
import { formatClock } from '@/lib/client/format-time';
import { dailyMail } from '@/lib/mail/daily-mail';
import { DARK, LIGHT } from '@/lib/mail/inks';
import { ternQuay } from './tern-quay';

/** What is left of a page when its tags go: what a client without style sheets shows. */
const words = (html: string): string =>
  html
    .replace(/<(style|title|head)[\s\S]*?<\/\1>/g, ' ')
    .replace(/<!--[\s\S]*?-->/g, '')
    .replace(/<[^>]+>/g, ' ')
    .replace(/&#x27;/g, "'")
    .replace(/&quot;/g, '"')
    .replace(/&amp;/g, '&')
    .replace(/\s+/g, ' ');

describe('the answer of the morning', () => {
  it('stands in the subject: how long, which day, how warm', async () => {
    const { subject } = await dailyMail(ternQuay());
    expect(subject).toContain('East energy centre');
    expect(subject).toContain('9 h 45 min');
    expect(subject).toContain('Fri 24 Jul');
    expect(subject).toContain('49.1 F');
  });

  it('stands in the preheader, which the html carries first and hidden', async () => {
    const { preheader, html } = await dailyMail(ternQuay());
    expect(preheader).toContain('966 gpm');
    expect(preheader).toContain('14 of 24');
    expect(html.indexOf(preheader)).toBeGreaterThan(0);
    expect(html.indexOf(preheader)).toBeLessThan(html.indexOf('Slackwater</td>'));
  });

  it('says yesterday only of the day before it was evaluated', async () => {
    expect(words((await dailyMail(ternQuay())).html)).toContain('9 h 45 min yesterday.');
    const later = ternQuay({ evaluatedAtMs: ternQuay().evaluatedAtMs + 3 * 86_400_000 });
    const { text } = await dailyMail(later);
    expect(text).toContain('on Fri 24 Jul.');
    expect(text).not.toContain('yesterday');
  });

  it('says so when no temperature tells how warm the supply got', async () => {
    const { subject, text } = await dailyMail(ternQuay({ warmest: null }));
    expect(subject).not.toContain('supply');
    expect(text.replace(/\s+/g, ' ')).toContain('How warm the supply got is not known.');
  });

  it('keeps a subject on one line whatever the plant is called', async () => {
    const { subject } = await dailyMail(ternQuay({ plantName: 'East\r\nBcc: other@plant.example' }));
    expect(subject).not.toMatch(/[\r\n]/);
  });
});

describe('every stretch of reverse flow', () => {
  it('has its local times, its largest flow and its warmest supply in html and text', async () => {
    const { html, text } = await dailyMail(ternQuay());
    const shown = words(html);
    for (const [times, gpm, supply] of [
      ['02:15 – 03:00', '−17 gpm', '44.2 °F'],
      ['06:00 – 07:00', '−110 gpm', '45.4 °F'],
      ['12:00 – 19:00', '−966 gpm', '49.1 °F'],
      ['23:00 – 00:00', '−59 gpm', '44.7 °F'],
    ] as const) {
      expect(shown).toContain(`${times} ${gpm} ${supply}`);
      expect(text).toMatch(
        new RegExp(`${times.replace('–', '-')} +${gpm.replace('−', '-')} +${supply.replace('°F', 'F')}`),
      );
    }
  });

  it('is told apart when the clocks run the hour twice', async () => {
    // New York goes back on 1 November 2026 at 06:00 UTC: 05:30 UTC is the first 01:30, 06:15 UTC the second 01:15.
    const [startMs, endMs] = [Date.parse('2026-11-01T05:30:00Z'), Date.parse('2026-11-01T06:15:00Z')];
    const stretch = { startMs, endMs, reverseMinutes: 45, largestFlowGpm: 80, warmestSupplyF: 45 };
    const { text } = await dailyMail(ternQuay({ day: '2026-11-01', stretches: [stretch] }));
    expect(text).toContain('01:30 - 01:15 (second)');
  });

  it('beyond the rows shown is counted with its minutes', async () => {
    const { text, html } = await dailyMail(ternQuay({ further: { count: 9, minutes: 65 } }));
    expect(text).toContain('And 9 shorter, 1 h 5 min in all.');
    expect(words(html)).toContain('And 9 shorter, 1 h 5 min in all.');
  });
});

describe('the figures of the day', () => {
  it('are low hours, cost, cause and data, each with its unit', async () => {
    const shown = words((await dailyMail(ternQuay())).html);
    expect(shown).toContain('Low delta-T hours 14 of 24');
    expect(shown).toContain('Excess energy cost 59.05 USD');
    expect(shown).toContain('Likely cause reverse flow');
    expect(shown).toContain('Data 100 % of the day');
  });

  it('give energy where there is no tariff', async () => {
    const { text } = await dailyMail(ternQuay({ excessCost: null, currency: null }));
    expect(text).toMatch(/Excess energy +422 kWh/);
    expect(text).not.toContain('USD');
  });

  it('never say 100 % of a day with a gap', async () => {
    const { text } = await dailyMail(ternQuay({ coverage: 287 / 288 }));
    expect(text).toContain('99 % of the day');
  });

  it('close: production less the buildings is the flow that came back', async () => {
    const { text } = await dailyMail(ternQuay());
    const [, made, drew] =
      /made ([\d,]+) gpm while the buildings drew ([\d,]+) gpm/.exec(text.replace(/\s+/g, ' ')) ?? [];
    const number = (figure = '') => Number(figure.replaceAll(',', ''));
    expect(number(made) - number(drew)).toBe(-966);
    expect(text.replace(/\s+/g, ' ')).toContain('2 of 3 units ran');
  });

  it('leave out what was going on when its flows are not known', async () => {
    const { text } = await dailyMail(ternQuay({ situation: null }));
    expect(text).not.toContain('buildings drew');
  });

  it('carry the interval of the flow beside the caution', async () => {
    const said = (await dailyMail(ternQuay())).text.replace(/\s+/g, ' ');
    expect(said).toContain('966 gpm backward lies between 872 and 1,059 (90 % interval)');
    expect(said).toContain("plant's operator and a licensed engineer");
    expect(said).toContain('writes to no control system');
  });

  it('say it when the interval reaches to the other side of the line', async () => {
    const largest = { atMs: ternQuay().evaluatedAtMs, flowGpm: 60, loGpm: -12, hiGpm: 130 };
    expect((await dailyMail(ternQuay({ largest }))).text.replace(/\s+/g, ' ')).toContain('between 12 forward and 130');
  });
});

describe('the html', () => {
  it('holds no image, no script and nothing to load', async () => {
    const { html } = await dailyMail(ternQuay());
    expect(html).not.toMatch(/<(img|script|link|iframe|svg|video|object)\b/i);
    expect(html).not.toMatch(/url\(|@import|background-image/i);
  });

  it('reads in order when styles are taken away', async () => {
    const shown = words((await dailyMail(ternQuay())).html);
    const order = ['It ran backwards', 'Acknowledge', '12:00 –', 'Low delta-T hours', 'the worst hour', 'An estimate'];
    const places = order.map((each) => shown.indexOf(each));
    expect(places.every((place) => place >= 0)).toBe(true);
    expect(places).toEqual([...places].sort((a, b) => a - b));
  });

  it('hides the strip from readers, and marks each reverse bar tall enough with /', async () => {
    const { html } = await dailyMail(ternQuay());
    const strip = html.slice(html.indexOf('aria-hidden="true"'), html.indexOf('02:15'));
    const marked = strip.match(/class="rev"[^>]*>(<span>)/g) ?? [];
    expect(marked.length).toBeGreaterThanOrEqual(6);
    expect(strip).toContain('/<br/>');
    expect(strip.slice(0, strip.indexOf('class="rev"'))).not.toContain('/<br/>');
  });

  it('sets every light ink inline and turns every one over in the dark sheet', async () => {
    const { html } = await dailyMail(ternQuay());
    const sheet = /<style>([\s\S]*?)<\/style>/.exec(html)?.[1] ?? '';
    const body = html.slice(html.indexOf('<body'));
    expect(sheet).toContain('prefers-color-scheme: dark');
    for (const ink of ['paper', 'ink', 'ink2', 'rule', 'fwd', 'rev'] as const) {
      expect(body, ink).toContain(LIGHT[ink]);
      expect(sheet, ink).toContain(DARK[ink]);
    }
    // An element with an ink of its own and no class would stay light ink on dark paper.
    for (const [element] of body.matchAll(/<\w+[^>]*style="[^"]*(?<![-\w])color:#13201e[^"]*"[^>]*>/g))
      expect(element).toMatch(/class="[^"]*\bink\b/);
  });

  it('escapes what people named', async () => {
    const { html } = await dailyMail(ternQuay({ plantName: '<img src=x> & Sons' }));
    expect(html).not.toContain('<img');
    expect(html).toContain('&lt;img src=x&gt; &amp; Sons');
  });

  it('links to acknowledging, the note, the worst hour by its clock, and the way out', async () => {
    const model = ternQuay();
    const { html, text } = await dailyMail(model);
    for (const link of Object.values(model.links)) {
      expect(html).toContain(`href="${link}"`);
      expect(text).toContain(link ?? '');
    }
    expect(words(html)).toContain(`Open ${formatClock(model.worstHourMs ?? 0, model.timeZone)}, the worst hour`);
  });
});

describe('the text', () => {
  it('keeps to 78 columns but for links, in characters every client shows', async () => {
    const { text } = await dailyMail(ternQuay());
    for (const line of text.split('\n')) if (!line.includes('https://')) expect(line.length).toBeLessThanOrEqual(78);
    expect(text).toMatch(/^[\x20-\x7e\n]*$/);
  });
});

it('the same model makes the same mail to the character', async () => {
  expect(await dailyMail(ternQuay())).toEqual(await dailyMail(ternQuay()));
});
