import { bearOut, doubt, JUST_OPEN, PERSON_DECIDES, says, type Draft } from './draft';
import { alignedTo, correlationOf, factorOf, FEWEST_ROWS, medianOf, stored } from './pairing';
import { runningAt, unitsOf, whereState } from './context-units';

/** Two flows within this share of each other are the same water. */
const SAME_SHARE = 0.06;
/** A flow that goes by the number of running units differs by no more than this share while that number stays. */
const PLATEAU_SHARE = 0.06;
const STEPS_WITH = 0.95;
const FOLLOWS = 0.8;
/** Confidence of a side that behaviour tells, and of one that is only what is left. */
const TOLD = 0.68;
const LEFT = 0.6;
const GUESSED = 0.42;

/** Which flow is which: by the sum of the units, by steps with their states, by what is left; and the bypass as a difference. */
export function weighFlows(drafts: readonly Draft[]): void {
  for (const draft of drafts.filter(isOpenFlow)) {
    // A column without a role has no unit, but is compared in the one it came in.
    draft.unit ??= draft.unitGiven ?? 'gpm';
    settleFlow(draft, drafts);
    if (draft.role === 'ignore') draft.unit = null;
  }
  for (const draft of drafts) {
    if (draft.role === 'primaryFlow' && says(draft, 'primary')) {
      const shown = showsPrimary(draft, drafts);
      const said = draft.shown.some((clause) => clause.startsWith('Takes steps'));
      if (shown && !said) bearOut(draft, shown);
    }
    if (draft.role === 'bypassFlow' || draft.role === 'bypassFlowUnsigned') weighBypass(draft, drafts);
  }
}

/** A flow of the plant whose name gives no side, or nothing at all. */
function isOpenFlow(draft: Draft): boolean {
  if (draft.quantity !== 'flow' || draft.confidence >= PERSON_DECIDES || draft.statistics.count < FEWEST_ROWS)
    return false;
  if (draft.role === 'ignore') return !says(draft, 'condenser', 'hotWater', 'air', 'elsewhere') && draft.confidence > 0;
  if (draft.role === 'primaryFlow') return !says(draft, 'primary');
  return draft.role === 'secondaryFlow' && !says(draft, 'secondary', 'branch');
}

function settleFlow(draft: Draft, drafts: readonly Draft[]): void {
  const named = says(draft, 'chilledWater', 'plant', 'supply', 'return');
  const shown = showsPrimary(draft, drafts);
  const set = (role: Draft['role'], confidence: number, clause: string) => {
    draft.role = role;
    draft.confidence = named ? confidence : Math.min(confidence, GUESSED);
    draft.shown.unshift(clause);
  };
  if (shown) return set('primaryFlow', TOLD, `${shown}: primary flow`);
  const primary = sure(drafts, 'primaryFlow').find((each) => each !== draft);
  const secondary = sure(drafts, 'secondaryFlow').find((each) => each !== draft);
  if (primary && secondary) {
    const other = alignedTo(draft, secondary);
    const main = alignedTo(draft, primary);
    if (!other || !main) return;
    const gap = main.map((value, i) => stored(primary, value) - stored(secondary, other[i]!));
    const together = correlationOf(draft.statistics.values, gap);
    if (together > 0.9)
      set(
        'bypassFlow',
        LEFT,
        `Moves as "${primary.column}" less "${secondary.column}" (correlation ${together.toFixed(2)})`,
      );
    return;
  }
  if (!named) return;
  if (primary && !secondary)
    set('secondaryFlow', LEFT, `taken for the secondary flow, because "${primary.column}" is the primary`);
  else if (secondary && !primary)
    set('primaryFlow', LEFT, `taken for the primary flow, because "${secondary.column}" is the secondary`);
}

const sure = (drafts: readonly Draft[], role: Draft['role']) =>
  drafts.filter((draft) => draft.role === role && draft.confidence >= PERSON_DECIDES && !isOpenFlow(draft));

/** Why a flow is that of the production units, in words; null when nothing shows it. */
function showsPrimary(draft: Draft, drafts: readonly Draft[]): string | null {
  const sum = sumOfUnits(draft, drafts);
  if (sum) {
    const gaps = draft.statistics.values.map((value, i) => {
      const [mine, theirs] = [stored(draft, value), sum.values[i]!];
      return theirs > 0 ? Math.abs(mine - theirs) / theirs : Number.NaN;
    });
    const gap = medianOf(gaps);
    if (gap < SAME_SHARE)
      return `Equals the sum of ${sum.count} unit flows within ${Math.max(1, Math.round(gap * 100))} %`;
  }
  return stepsWithUnits(draft, drafts);
}

function sumOfUnits(draft: Draft, drafts: readonly Draft[]): { values: Float64Array; count: number } | null {
  const flows = drafts.filter((each) => each.role === 'unitFlow' && each !== draft && each.unit !== null);
  if (flows.length < 2) return null;
  const values = new Float64Array(draft.statistics.values.length);
  for (const flow of flows) {
    const aligned = alignedTo(draft, flow);
    if (!aligned) return null;
    for (let i = 0; i < values.length; i++) values[i] = values[i]! + stored(flow, aligned[i]!);
  }
  return { values, count: flows.length };
}

function stepsWithUnits(draft: Draft, drafts: readonly Draft[]): string | null {
  const masks = unitsOf(drafts).flatMap((unit) => {
    const status = unit.find('unitStatus');
    return status ? [runningAt(unit, draft)?.running ?? null] : [];
  });
  if (masks.length === 0 || masks.some((mask) => mask === null)) return null;
  const { values } = draft.statistics;
  const running = new Float64Array(values.length);
  for (const mask of masks) for (let i = 0; i < running.length; i++) running[i] = running[i]! + mask![i]!;
  const together = correlationOf(values, running);
  if (!(together > STEPS_WITH)) return null;
  for (const count of new Set(running)) {
    if (!(count > 0)) continue;
    const mask = running.map((each) => (each === count ? 1 : 0));
    const plateau = whereState(values, mask, 1).sort();
    if (plateau.length < FEWEST_ROWS / 2) continue;
    const spread = plateau[Math.floor(plateau.length * 0.9)]! - plateau[Math.floor(plateau.length * 0.1)]!;
    if (spread > PLATEAU_SHARE * Math.abs(medianOf(plateau))) return null;
  }
  return 'Steps with the number of running units and stays between';
}

function weighBypass(draft: Draft, drafts: readonly Draft[]): void {
  const [primary] = sure(drafts, 'primaryFlow');
  const [secondary] = sure(drafts, 'secondaryFlow');
  if (!primary || !secondary) return;
  const [main, other] = [alignedTo(draft, primary), alignedTo(draft, secondary)];
  if (!main || !other) return;
  const unsigned = draft.role === 'bypassFlowUnsigned';
  const gap = main.map((value, i) => {
    const difference = value * factorOf(primary) - other[i]! * factorOf(secondary);
    return unsigned ? Math.abs(difference) : difference;
  });
  const together = correlationOf(draft.statistics.values, gap);
  const words = `"${primary.column}" less "${secondary.column}"`;
  if (together > FOLLOWS)
    bearOut(draft, `Moves as ${words}${unsigned ? ' without its sign' : ''} (correlation ${together.toFixed(2)})`);
  else if (!unsigned && together < -FOLLOWS)
    doubt(draft, JUST_OPEN, `Moves against ${words}: its sign is the other way round`);
}
