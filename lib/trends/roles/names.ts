import { conceptsOfWord, type Concept } from './vocabulary';

/** What a point's name says, with the piece of the name that says it. */
export interface NameReading {
  says: ReadonlyMap<Concept, string>;
  /** Number (or letter) of the chiller, pump or branch, from 1. */
  index: number | null;
  /** The piece `sp`: a set-point or the secondary pump, as the quantity shows. */
  setpointOrPump: string | null;
  /** A bare `f`: flow or degrees. */
  letterF: boolean;
}

/** The pieces of a name: parted by signs, by a change from small to capital letters and around numbers. */
export function piecesOf(name: string): string[] {
  const spaced = name
    .normalize('NFKC')
    .replace(/kW\s*\/\s*ton/gi, ' KWTON ')
    .replace(/kWh(?![a-z])/gi, ' KWH ')
    .replace(/k[wW](?![a-z])/g, ' KW ')
    .replace(/Ch[Ww]/g, 'CHW')
    .replace(/(?:\b|_)d[-_ ]?P(?![a-z])/g, ' DP ')
    .replace(/(?:[δΔ∆]\s?|delta[\s_-]?)P(?![a-z])/g, ' DP ')
    .replace(/(?:[δΔ∆]\s?|delta[\s_-]?|(?:\b|_)d)T(?![a-z])/g, ' DELTAT ');
  return spaced.match(/[A-Z]+(?![a-zß-ÿ])|[A-Z]?[a-zß-ÿ]+|\d+/g) ?? [];
}

/** Pieces that may be the name of a site; words and letters that say what a point is are none. */
function mayBePrefix(piece: string): boolean {
  const word = piece.toLowerCase();
  if (word.length === 1) return !'pstrfbec'.includes(word);
  return word !== 'sp' && conceptsOfWord(word).every((concept) => ['plant', 'branch', 'counter'].includes(concept));
}

/** How many leading pieces all names share (a site or plant prefix), which say nothing about any one of them. */
export function sharedPrefix(names: readonly (readonly string[])[]): number {
  if (names.length < 3) return 0;
  const [first, ...rest] = names;
  let shared = 0;
  while (
    shared < first!.length - 1 &&
    mayBePrefix(first![shared]!) &&
    rest.every((name) => name.length > shared + 1 && name[shared] === first![shared])
  )
    shared++;
  return shared;
}

/** What carries a number in its name. */
export const NUMBERED: readonly Concept[] = ['chiller', 'pump', 'branch'];

export function readName(pieces: readonly string[]): NameReading {
  const says = new Map<Concept, string>();
  const say = (concept: Concept, piece: string) => {
    if (!says.has(concept)) says.set(concept, piece);
  };
  const letters: { letter: string; piece: string }[] = [];
  let index: number | null = null;
  let setpointOrPump: string | null = null;
  for (const [i, piece] of pieces.entries()) {
    const word = piece.toLowerCase();
    const next = pieces[i + 1] ?? '';
    if (word === 'sp') setpointOrPump = piece;
    const concepts =
      word.length === 1 ? (word === 'p' && /^\d{1,2}$/.test(next) ? (['pump'] as const) : []) : conceptsOfWord(word);
    for (const concept of concepts) say(concept, piece);
    if (concepts.length === 0 && word.length === 1) letters.push({ letter: word, piece });
    if (concepts.some((concept) => NUMBERED.includes(concept))) index ??= numberOfPiece(next);
  }
  readLetters(letters, says, say);
  if (index === null && NUMBERED.some((concept) => says.has(concept))) index = loneNumber(pieces);
  return { says, index, setpointOrPump, letterF: letters.some(({ letter }) => letter === 'f') };
}

function numberOfPiece(piece: string): number | null {
  if (/^\d{1,3}$/.test(piece)) return Number(piece) || null;
  return /^[a-h]$/i.test(piece) ? piece.toLowerCase().charCodeAt(0) - 96 : null;
}

function loneNumber(pieces: readonly string[]): number | null {
  const numbers = pieces.filter((piece) => /^\d{1,3}$/.test(piece));
  return numbers.length === 1 ? Number(numbers[0]) || null : null;
}

/** Single letters mean what the rest of the name leaves open. */
function readLetters(
  letters: readonly { letter: string; piece: string }[],
  says: ReadonlyMap<Concept, string>,
  say: (concept: Concept, piece: string) => void,
): void {
  const has = (...concepts: Concept[]) => concepts.some((concept) => says.has(concept));
  const chiller = has('chiller');
  for (const { letter, piece } of letters) {
    if (letter === 't') say('temperature', piece);
    if (letter === 'r') say('return', piece);
    if (letter === 'p') say('primary', piece);
    if (letter === 'e' && chiller) say('evaporator', piece);
    if (letter === 'c' && chiller) say('condenser', piece);
  }
  const b = letters.find(({ letter }) => letter === 'b');
  const placed = has('primary', 'secondary', 'supply', 'return', 'leaving', 'entering', 'chiller', 'pump', 'branch');
  if (b && !placed) say('bypass', b.piece);
  const esses = letters.filter(({ letter }) => letter === 's');
  if (esses.length === 0) return;
  const directed = has('supply', 'return', 'leaving', 'entering');
  const moves = has('flow', 'pump', 'power', 'speed', 'status') || letters.some(({ letter }) => letter === 'f');
  if (esses.length > 1) say('supply', esses[1]!.piece);
  say(directed || moves || esses.length > 1 ? 'secondary' : 'supply', esses[0]!.piece);
}
