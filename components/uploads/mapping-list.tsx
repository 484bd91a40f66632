'use client';
import { Button, TextButton } from '@/components/ui/button';
import { Checkbox, Input } from '@/components/ui/field';
import { HeadCell, Table } from '@/components/ui/table';
import { usePhone } from '@/components/ui/use-phone';
import { EN_DASH, formatNumber } from '@/lib/client/format';
import { dialectWords, filesWords, shapeWords } from '@/lib/client/table-words';
import type { Preview } from '@/lib/schemas/upload';
import { carriedNames, clashWords, nounOf, openColumns, roleCounts, type ColumnAnswer } from './mapping-form';
import { MappingRow } from './mapping-row';
import { ROWS_A_PAGE, useMappingList, type ListedRow, type MappingList as Listing } from './use-mapping-list';

/** From so many columns on, finding one takes more than a look. */
const WORTH_A_FILTER = 16;

export interface MappingListProps {
  preview: Preview;
  answers: readonly ColumnAnswer[];
  unitCount: number;
  disabled: boolean;
  /** Fold away what earlier files of the plant have settled. */
  foldKnown: boolean;
  onChange: (answer: ColumnAnswer) => void;
  onLeaveOutOpen: () => void;
}

/** The columns or points with their answers, a heading of the drop after the other. */
export function MappingList(props: MappingListProps) {
  const { preview, answers, unitCount, disabled, foldKnown, onChange, onLeaveOutOpen } = props;
  const phone = usePhone();
  const list = useMappingList(preview, answers, phone, foldKnown);
  const counts = roleCounts(answers);
  const open = openColumns(answers).length;
  const noun = nounOf(preview);
  const long = preview.columns.length >= WORTH_A_FILTER;
  return (
    <>
      {long || open > 1 || list.known > 0 ? (
        <div className="mb-2.5 flex flex-wrap items-center gap-x-6 gap-y-2">
          {long ? (
            <Input
              type="search"
              aria-label={`Find ${noun}s by name or role`}
              placeholder="find by name or role"
              value={list.filter}
              onChange={(event) => list.setFilter(event.target.value)}
              className="w-[260px]! phone:w-full!"
            />
          ) : null}
          {long && (open > 0 || list.onlyOpen) ? (
            <Checkbox checked={list.onlyOpen} onChange={list.setOnlyOpen}>
              only undecided ({formatNumber(open)})
            </Checkbox>
          ) : null}
          {open > 1 && !disabled ? (
            <TextButton onClick={onLeaveOutOpen}>leave out all {formatNumber(open)} undecided</TextButton>
          ) : null}
          {list.known > 0 ? (
            <TextButton aria-expanded={list.showsKnown} onClick={() => list.setShowsKnown(!list.showsKnown)}>
              {list.showsKnown ? 'fold away ' : ''}
              {formatNumber(list.known)} {list.known === 1 ? noun : `${noun}s`} read as in earlier files
            </TextButton>
          ) : null}
        </div>
      ) : null}
      <Table
        caption="Columns with role, unit, reason and confidence"
        className="phone:block phone:[&_tbody]:block"
        dense
      >
        <thead className="phone:sr-only">
          <tr>
            <HeadCell>{noun}</HeadCell>
            <HeadCell>first rows</HeadCell>
            <HeadCell numeric>low to high</HeadCell>
            <HeadCell>role</HeadCell>
            <HeadCell>unit</HeadCell>
            <HeadCell>why</HeadCell>
            <HeadCell>confidence</HeadCell>
          </tr>
        </thead>
        {byTable(list.rows).map(({ table, rows }) => (
          <tbody key={table}>
            {preview.tables.length > 1 ? <TableHead preview={preview} table={table} /> : null}
            {rows.map(({ index }) => {
              const column = preview.columns[index];
              const answer = answers[index];
              return column && answer ? (
                <MappingRow
                  key={column.column}
                  column={column}
                  answer={answer}
                  clash={clashWords(counts, answer)}
                  carried={column.known ? null : carriedNames(preview, answer)}
                  unitCount={unitCount}
                  disabled={disabled}
                  onChange={onChange}
                />
              ) : null;
            })}
          </tbody>
        ))}
      </Table>
      {list.rows.length === 0 ? (
        <p className="py-2.5 text-ink-2">
          {list.filter !== '' || list.onlyOpen ? 'None is like that.' : 'Nothing here is new.'}
        </p>
      ) : null}
      <Pager list={list} />
    </>
  );
}

function byTable(rows: readonly ListedRow[]): { table: number; rows: ListedRow[] }[] {
  const groups: { table: number; rows: ListedRow[] }[] = [];
  for (const row of rows) {
    const last = groups.at(-1);
    if (last?.table === row.table) last.rows.push(row);
    else groups.push({ table: row.table, rows: [row] });
  }
  return groups;
}

/** One heading of the drop: its files, and how they are written. */
function TableHead({ preview, table }: { preview: Preview; table: number }) {
  const found = preview.tables[table];
  if (found === undefined) return null;
  const step =
    found.stepMinutes === null
      ? ''
      : `, every ${formatNumber(found.stepMinutes, { decimals: found.stepMinutes % 1 === 0 ? 0 : 2 })} min`;
  return (
    <tr className="phone:block">
      <th
        scope="rowgroup"
        colSpan={7}
        className="border-b-rule! pt-4! phone:block phone:border-b phone:px-2 phone:pb-1.5!"
        title={found.files.length > 3 ? found.files.join('\n') : undefined}
      >
        <span className="font-semibold break-words">{filesWords(found.files)}</span>
        <span className="ml-3.5 text-ink-2 phone:ml-0 phone:block">
          {found.files.length > 1 ? `${found.files.length} files with one heading; ` : ''}
          {shapeWords(found)}; {dialectWords(found)}
          {step}
        </span>
      </th>
    </tr>
  );
}

function Pager({ list }: { list: Listing }) {
  if (list.pages < 2) return null;
  const first = list.page * ROWS_A_PAGE + 1;
  const last = Math.min(list.matching, first + ROWS_A_PAGE - 1);
  return (
    <nav aria-label="Columns" className="mt-2.5 flex flex-wrap items-center gap-2.5">
      <Button disabled={list.page === 0} onClick={() => list.setPage(list.page - 1)}>
        Back
      </Button>
      <Button disabled={list.page === list.pages - 1} onClick={() => list.setPage(list.page + 1)}>
        Next
      </Button>
      <span role="status" className="text-ink-2">
        {formatNumber(first)} {EN_DASH} {formatNumber(last)} of {formatNumber(list.matching)}
      </span>
    </nav>
  );
}
