import { Cell, HeadCell } from '@/components/ui/table';
import { Tag } from '@/components/ui/tag';
import { formatNumber, MISSING } from '@/lib/client/format';
import type { Upload } from '@/lib/schemas/upload';

/** What was found and what was done about it, a kind of trouble a row. */
export function ProblemTable({ problems, rowsRead }: { problems: Upload['problems']; rowsRead?: number }) {
  const total = problems.reduce((sum, problem) => sum + problem.count, 0);
  return (
    <div className="border-l-[3px] border-ink pl-4">
      <table className="table" data-dense>
        <caption className="sr-only">Problems found while reading</caption>
        <thead>
          <tr>
            <HeadCell>
              <span className="sr-only">severity</span>
            </HeadCell>
            <HeadCell>first row</HeadCell>
            <HeadCell>column</HeadCell>
            <HeadCell>what was found, what was done</HeadCell>
            <HeadCell numeric>count</HeadCell>
          </tr>
        </thead>
        <tbody>
          {problems.map((problem, index) => (
            <tr key={`${problem.code}-${problem.column ?? ''}-${index}`}>
              <td>
                <Tag variant={problem.severity === 'error' ? 'reversed' : 'outlined'}>{problem.severity}</Tag>
              </td>
              <td>{problem.row === undefined ? MISSING : formatNumber(problem.row)}</td>
              <td className="break-all">{problem.column ?? MISSING}</td>
              <td className="max-w-[70ch]">{problem.message}</td>
              <Cell numeric>{formatNumber(problem.count)}</Cell>
            </tr>
          ))}
        </tbody>
      </table>
      {rowsRead !== undefined && rowsRead > 0 ? (
        <p className="pt-2 text-small text-ink-2">
          {problems.length} {problems.length === 1 ? 'kind' : 'kinds'}, {formatNumber(total)} times in{' '}
          {formatNumber(rowsRead)} rows
        </p>
      ) : null}
    </div>
  );
}
