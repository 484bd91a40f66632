import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { EN_DASH, formatNumber } from '@/lib/client/format';
import { ACCURACY, groupOf, HUNTING, keepsGoal, measureOf, RIGHT_BEYOND_5, type Measure } from './accuracy';

const RATIO = 'RMSE of b / textbook';
const WORST = ': worst plant';

/** The bench's word for a measure, ours, and how it is printed. */
interface Row {
  measure: string;
  words: string;
  decimals?: number;
  /** Printed as percent. */
  percent?: boolean;
  unit?: string;
  inset?: boolean;
}
const ROWS: readonly Row[] = [
  { measure: 'direction right', words: 'direction right' },
  { measure: RIGHT_BEYOND_5, words: 'where over 5\u00a0% of secondary flow crosses over', inset: true },
  { measure: RIGHT_BEYOND_5 + WORST, words: 'in the worst plant', inset: true },
  { measure: 'direction right, |b| > 10 %', words: 'where over 10\u00a0% crosses over', inset: true },
  { measure: 'right of running, |b| > 5 %', words: 'over 5\u00a0%, unknown counted as wrong', inset: true },
  { measure: 'sign right where forward or reverse', words: 'sign right where forward or reverse is said' },
  { measure: 'within 5 % where still', words: 'truth within 5\u00a0% where still is said' },
  { measure: 'answered', words: 'answered' },
  { measure: 'given a direction', words: 'given a direction' },
  { measure: 'false reverse', words: 'false reverse, of what is not reverse' },
  { measure: 'missed reverse', words: 'missed reverse, of reverse over 2\u00a0%' },
  { measure: 'Brier score', words: 'Brier score of the probability of reverse' },
  { measure: 'expected calibration error', words: 'expected calibration error, 10 bins' },
  { measure: RATIO, words: 'bypass error over the textbook’s', decimals: 2 },
  { measure: RATIO + WORST, words: 'in the worst plant', decimals: 2, inset: true },
  {
    measure: 'RMSE of b, share of design',
    words: 'bypass error, of design flow',
    percent: true,
    decimals: 1,
    unit: '%',
  },
  { measure: 'RMSE of blended supply, F', words: 'blended supply error', decimals: 2, unit: '°F' },
  { measure: 'coverage of b', words: '90\u00a0% interval holds the true bypass' },
  { measure: 'coverage of blended supply', words: '90\u00a0% interval holds the true blended supply' },
  { measure: 'sensor offsets, F', words: 'error of sensor offsets, common mean off', decimals: 2, unit: '°F' },
  { measure: 'ratio of meter gains, %', words: 'error of the ratio of meter gains', decimals: 1, unit: '%' },
];

function figure({ value }: Measure, { decimals = 4, percent = false }: Pick<Row, 'decimals' | 'percent'> = {}): string {
  return formatNumber(percent ? 100 * value : value, { decimals });
}

/** A figure in bold, and said so to who cannot see it, where it falls short of its goal. */
function Figure({ measure, row = {} }: { measure: Measure; row?: Pick<Row, 'decimals' | 'percent'> }) {
  if (keepsGoal(measure)) return <>{figure(measure, row)}</>;
  return (
    <b>
      {figure(measure, row)}
      <span className="sr-only"> (short of its goal)</span>
    </b>
  );
}

function goalWords({ atLeast, atMost }: Measure): string {
  if (atLeast !== undefined && atMost !== undefined) return `${atLeast}${EN_DASH}${atMost}`;
  if (atLeast !== undefined) return `at least ${atLeast}`;
  return atMost === undefined ? '' : `at most ${atMost}`;
}

/** Every measure of fleet 0, for all plants, near balance and away from it, each beside its goal. */
export function AccuracyTable() {
  const [all, near, away] = [groupOf('all'), groupOf('near balance'), groupOf('away from balance')];
  return (
    <Table caption="Accuracy on simulated plants: all, near balance, away from it" dense>
      <thead>
        <tr>
          <HeadCell>measure</HeadCell>
          <HeadCell numeric>all {all.plants}</HeadCell>
          <HeadCell numeric className="phone:hidden">
            goal
          </HeadCell>
          <HeadCell numeric className="phone:whitespace-normal!">
            near balance, {near.plants}
          </HeadCell>
          <HeadCell numeric className="phone:hidden">
            goal
          </HeadCell>
          <HeadCell numeric>away, {away.plants}</HeadCell>
        </tr>
      </thead>
      <tbody>
        {ROWS.map((row) => (
          <tr key={row.measure}>
            <RowHead className={row.inset ? 'ps-3.5!' : ''}>
              {row.words}
              {row.unit === undefined ? null : <span className="text-micro text-ink-3"> {row.unit}</span>}
            </RowHead>
            <WithGoal measure={measureOf(all, row.measure)} row={row} />
            <WithGoal measure={measureOf(near, row.measure)} row={row} />
            <Cell numeric>
              <Figure measure={measureOf(away, row.measure)} row={row} />
            </Cell>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

/** A figure and its goal: two cells, on a phone one under the other. */
function WithGoal({ measure, row }: { measure: Measure; row: Row }) {
  const goal = goalWords(measure);
  return (
    <>
      <Cell numeric>
        <Figure measure={measure} row={row} />
        {goal === '' ? null : <span className="hidden text-micro text-ink-2 phone:block">{goal}</span>}
      </Cell>
      <Cell numeric className="text-small text-ink-2 phone:hidden">
        {goal}
      </Cell>
    </>
  );
}

interface Column {
  measure: string;
  head: string;
  decimals?: number;
  percent?: boolean;
}
const COLUMNS: readonly Column[] = [
  { measure: RIGHT_BEYOND_5, head: 'right over 5\u00a0%', decimals: 3 },
  { measure: 'given a direction', head: 'given', decimals: 3 },
  { measure: 'Brier score', head: 'Brier', decimals: 3 },
  { measure: RATIO, head: 'over textbook', decimals: 2 },
  { measure: 'RMSE of b, share of design', head: 'bypass, %\u00a0of design', decimals: 1, percent: true },
  { measure: 'RMSE of blended supply, F', head: 'blend, °F', decimals: 2 },
  { measure: 'coverage of b', head: 'holds bypass', decimals: 2 },
  { measure: 'coverage of blended supply', head: 'holds blend', decimals: 2 },
  { measure: 'sensor offsets, F', head: 'offsets, °F', decimals: 2 },
];

const SENSINGS = [
  ['both-meters', 'both meters'],
  ['pump-status', 'pump status for a meter'],
  ['one-meter', 'one meter'],
  ['temperatures', 'temperatures only'],
] as const;

export function SensingTable() {
  return (
    <Grid
      caption="Accuracy by what measures the flows"
      first="flows from"
      rows={SENSINGS.map(([group, words]) => ({
        words,
        cells: COLUMNS.map((each) => measureOf(groupOf(group), each.measure)),
      }))}
    />
  );
}

/** The other fleets beside the first: all plants, then those near balance. */
export function FleetTable() {
  const rows = (['all', 'near balance'] as const).flatMap((group) =>
    ACCURACY.fleets.map((_, fleet) => ({
      words: `fleet ${fleet}, ${group}`,
      cells: COLUMNS.map((each) => measureOf(groupOf(group, fleet), each.measure)),
    })),
  );
  return <Grid caption="Accuracy on fleets of other plants" first="plants" rows={rows} />;
}

const PLANT_HEADS = ['>5 %', 'given', 'Brier', 'ratio', 'rmse b', 'blend F', 'cover b', 'cover F', 'offset'] as const;

/** The plant of fleet 0 that hunts, and those that come last in what counts, each once. */
function weakPlants(): { plant: string; words: string }[] {
  const named = [{ plant: HUNTING, words: 'hunts within the interval' }];
  const plants = Object.entries(ACCURACY.fleets[0]?.plants ?? {});
  const last = (head: (typeof PLANT_HEADS)[number], sign: 1 | -1, count: number, words: string) => {
    const ranked = plants
      .filter(([plant, of]) => of?.[head] !== undefined && !named.some((each) => each.plant === plant))
      .sort(([, one], [, other]) => sign * ((one?.[head] ?? 0) - (other?.[head] ?? 0)));
    for (const [plant] of ranked.slice(0, count)) named.push({ plant, words });
  };
  last('>5 %', 1, 3, 'least often right over 5\u00a0%');
  last('ratio', -1, 2, 'most error over the textbook’s');
  last('cover F', 1, 2, 'blended supply least often held');
  return named;
}

export function WeakTable() {
  const rows = weakPlants().map(({ plant, words }) => ({
    words,
    name: plant,
    cells: PLANT_HEADS.map((head) => ({ value: ACCURACY.fleets[0]?.plants[plant]?.[head] ?? Number.NaN })),
  }));
  return <Grid caption="Single plants where it is weak" first="plant" rows={rows} />;
}

interface GridProps {
  caption: string;
  first: string;
  /** `name`: as the bench prints it. */
  rows: readonly { words: string; name?: string; cells: readonly Measure[] }[];
}

/** One line a group, the same nine measures in each. */
function Grid({ caption, first, rows }: GridProps) {
  return (
    <Table caption={caption} dense>
      <thead>
        <tr>
          <HeadCell>{first}</HeadCell>
          {COLUMNS.map(({ head }) => (
            <HeadCell key={head} numeric className="whitespace-normal!">
              {head}
            </HeadCell>
          ))}
        </tr>
      </thead>
      <tbody>
        {rows.map(({ words, name, cells }, index) => (
          <tr key={`${index}/${words}`}>
            <RowHead className="w-[190px] text-pretty phone:min-w-[112px]">
              {words}
              {name === undefined ? null : (
                <span className="block text-small whitespace-nowrap text-ink-2 phone:whitespace-normal">{name}</span>
              )}
            </RowHead>
            {cells.map((measure, place) => (
              <Cell key={COLUMNS[place]?.head} numeric>
                <Figure measure={measure} row={COLUMNS[place]} />
              </Cell>
            ))}
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
