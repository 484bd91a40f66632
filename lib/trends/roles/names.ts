import { conceptsOfWord, plainWord, type Concept } from './vocabulary';

/** What a point's name says, with the piece of the name that says it. */
export interface NameReading {
  says: ReadonlyMap<Concept, string>;
  /** Number (or letter) of the chiller, pump or branch as the name has it; some plants count from 0. */
  index: number | null;
  /** The only number of a name that speaks of no chiller, pump or branch. */
  looseNumber: number | null;
  /** The piece `sp`: a set-point or the secondary pump, as the quantity shows. */
  setpointOrPump: string | null;
  /** Kilowatts stand within the name. */
  kilowatts: boolean;
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
    .replace(/\bch[\s_.-]*(?:water|wtr)/gi, ' CHW ')
    .replace(/by[\s_-]pass/gi, ' bypass ')
    .replace(/set[\s_-](?:point|pt)/gi, ' setpoint ')
    .replace(/(?:\b|_)d[-_ ]?P(?![a-z])/g, ' DP ')
    .replace(/(?:[δΔ∆]\s?|delta[\s_-]?)P(?![a-z])/g, ' DP ')
    .replace(/(?:[δΔ∆]\s?|delta[\s_-]?|(?:\b|_)d)T(?![a-z])/g, ' DELTAT ');
  return spaced.match(/\p{Lu}+(?!\p{Ll})|\p{Lu}?\p{Ll}+|\d+/gu) ?? [];
}

/** Pieces that may be the name of a site; words and letters that say what a point is are none. */
function mayBePrefix(piece: string): boolean {
  const word = plainWord(piece);
  if (word.length === 1) return !'pstrfbec'.includes(word);
  return (
    word !== 'sp' &&
    conceptsOfWord(word).every((concept) => ['plant', 'branch', 'counter', 'elsewhere', 'quality'].includes(concept))
  );
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

/** Words between the name of a unit and its number. */
const NUMBER_WORDS = new Set(['no', 'nr', 'num', 'number', 'numero', 'unit', 'n']);
/** German water words, beside which `KW` is cold water and no power. */
const GERMAN_WATER = new Set(['vorlauf', 'rucklauf', 'ruecklauf', 'vl', 'rl', 'kaltemaschine', 'kaeltemaschine']);

export function readName(pieces: readonly string[]): NameReading {
  const says = new Map<Concept, string>();
  const say = (concept: Concept, piece: string) => {
    if (!says.has(concept)) says.set(concept, piece);
  };
  const words = pieces.map(plainWord);
  const letters: { letter: string; piece: string }[] = [];
  const numbers = new Map<Concept, number>();
  let setpointOrPump: string | null = null;
  let lettered = -1;
  for (const [i, piece] of pieces.entries()) {
    const word = words[i]!;
    if (word === 'sp') setpointOrPump = piece;
    const concepts = conceptsOfPiece(words, i);
    for (const concept of concepts) say(concept, piece);
    if (concepts.length === 0 && word.length === 1 && i !== lettered) letters.push({ letter: word, piece });
    const numbered = NUMBERED.find((concept) => concepts.includes(concept));
    if (numbered && !numbers.has(numbered)) {
      const at = NUMBER_WORDS.has(words[i + 1] ?? '') ? i + 2 : i + 1;
      const number = numberOfPiece(pieces[at] ?? '');
      if (number !== null) {
        numbers.set(numbered, number);
        // The C of "Chiller C" is its name and no condenser.
        lettered = at;
      }
    }
  }
  readLetters(letters, says, say);
  const said = NUMBERED.filter((concept) => says.has(concept));
  // The chiller of "Building 1 chiller 2" is number 2; a pump or building in the path does not count then.
  const index = numbers.get(said[0] ?? 'chiller') ?? (said.length > 0 ? loneNumber(pieces) : null);
  const looseNumber = said.length === 0 ? loneNumber(pieces) : null;
  const kilowatts = words.includes('kw') && says.has('power');
  return { says, index, looseNumber, setpointOrPump, kilowatts, letterF: letters.some(({ letter }) => letter === 'f') };
}

function conceptsOfPiece(words: readonly string[], i: number): readonly Concept[] {
  const word = words[i]!;
  const next = words[i + 1] ?? '';
  if (word.length === 1) return word === 'p' && /^\d{1,2}$/.test(next) ? ['pump'] : [];
  if (word === 'kw' && words.some((each) => GERMAN_WATER.has(each))) return ['chilledWater'];
  const concepts = conceptsOfWord(word);
  // A chiller plant, or its room, is no chiller.
  const ofPlant =
    concepts.includes('chiller') &&
    (next === 'room' || next === 'yard' || saysPlant(next) || words[i - 1] === 'planta');
  if (ofPlant) return ['plant'];
  return word === 'room' && i > 0 && saysChillerOrPlant(words[i - 1]!) ? [] : concepts;
}

const saysPlant = (word: string): boolean => word.length > 1 && conceptsOfWord(word)[0] === 'plant' && word !== 'total';
const saysChillerOrPlant = (word: string): boolean =>
  word === 'mechanical' || conceptsOfWord(word).some((concept) => concept === 'chiller' || concept === 'plant');

function numberOfPiece(piece: string): number | null {
  if (/^\d{1,3}$/.test(piece)) return Number(piece);
  return /^[a-h]$/i.test(piece) ? piece.toLowerCase().charCodeAt(0) - 96 : null;
}

function loneNumber(pieces: readonly string[]): number | null {
  const numbers = pieces.filter((piece) => /^\d{1,3}$/.test(piece));
  return numbers.length === 1 ? Number(numbers[0]) : null;
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
