'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { Undo2 } from 'lucide-react';
import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { plantPath } from '@/components/shell/tabs';
import { Button } from '@/components/ui/button';
import { Checkbox } from '@/components/ui/field';
import { Section } from '@/components/ui/section';
import { Notice } from '@/components/ui/states';
import { HeadCell, Table } from '@/components/ui/table';
import { useKeys } from '@/components/ui/use-keys';
import { sendJson } from '@/lib/client/api';
import { uploadsQuery } from '@/lib/client/queries';
import type { Preview, Upload } from '@/lib/schemas/upload';
import { clashWords, mappingBody, openColumns, suggestedAnswers, type ColumnAnswer } from './mapping-form';
import { MappingRow } from './mapping-row';
import { ProblemTable } from './problem-table';

export interface MappingFormProps {
  plantId: string;
  upload: Upload;
  preview: Preview;
  unitCount: number;
  mayConfirm: boolean;
  /** Why nothing can be changed, where that is so. */
  closedBecause: string | null;
}

/** The columns and their answers, undo, and the confirmation that lets the import go on. */
export function MappingForm({ plantId, upload, preview, unitCount, mayConfirm, closedBecause }: MappingFormProps) {
  const router = useRouter();
  const queries = useQueryClient();
  const [history, setHistory] = useState<readonly ColumnAnswer[][]>([suggestedAnswers(preview)]);
  const [remember, setRemember] = useState(true);
  const answers = history.at(-1) ?? [];
  const open = openColumns(answers);
  const undo = () => setHistory((past) => (past.length > 1 ? past.slice(0, -1) : past));
  const change = (next: ColumnAnswer) =>
    setHistory((past) => [
      ...past,
      (past.at(-1) ?? []).map((answer) => (answer.column === next.column ? next : answer)),
    ]);
  useKeys({ u: undo });
  const confirm = useMutation({
    mutationFn: () => sendJson('PUT', `/uploads/${upload.id}/mapping`, mappingBody(preview, answers, remember)),
    onSuccess: async () => {
      await queries.invalidateQueries({ queryKey: uploadsQuery(plantId).queryKey });
      router.push(plantPath(plantId, 'uploads'));
    },
  });
  const found = [...upload.problems, ...(upload.problems.length === 0 ? preview.problems : [])];
  return (
    <form
      aria-label="Columns of the file"
      onSubmit={(event) => {
        event.preventDefault();
        if (mayConfirm && open.length === 0 && !confirm.isPending) confirm.mutate();
      }}
    >
      <Section title="Columns" sub="suggested role, why, and the data itself">
        <Table
          caption="Columns with role, unit, reason and confidence"
          className="phone:block phone:[&_tbody]:block"
          dense
        >
          <thead className="phone:sr-only">
            <tr>
              <HeadCell>column</HeadCell>
              <HeadCell>first rows</HeadCell>
              <HeadCell numeric>low to high</HeadCell>
              <HeadCell>role</HeadCell>
              <HeadCell>unit</HeadCell>
              <HeadCell>why</HeadCell>
              <HeadCell>confidence</HeadCell>
            </tr>
          </thead>
          <tbody>
            {preview.columns.map((column, index) => {
              const answer = answers[index];
              return answer ? (
                <MappingRow
                  key={column.column}
                  column={column}
                  answer={answer}
                  clash={clashWords(answers, answer)}
                  unitCount={unitCount}
                  disabled={!mayConfirm}
                  onChange={change}
                />
              ) : null;
            })}
          </tbody>
        </Table>
        {closedBecause === null ? (
          <div className="mt-3 flex flex-wrap items-center justify-between gap-x-6 gap-y-3">
            <Checkbox checked={remember} onChange={setRemember}>
              Remember for this heading on this plant
            </Checkbox>
            <div className="flex flex-wrap items-center gap-2.5">
              <span role="status" className="mr-2 text-ink-2">
                {open.length === 0
                  ? 'Every column is decided.'
                  : `${open.length} ${open.length === 1 ? 'column still needs' : 'columns still need'} a role, a unit or “leave out”`}
              </span>
              <Button onClick={undo} disabled={history.length < 2}>
                <Undo2 size={16} strokeWidth={1.5} aria-hidden="true" />
                Undo
              </Button>
              <Button
                type="submit"
                variant={open.length === 0 ? 'primary' : 'normal'}
                disabled={open.length > 0 || confirm.isPending}
              >
                {confirm.isPending ? 'Confirming' : 'Confirm and import'}
              </Button>
            </div>
          </div>
        ) : (
          <p className="mt-3 text-ink-2">{closedBecause}</p>
        )}
        {confirm.error ? (
          <div className="mt-3">
            <Notice live>{confirm.error.message}</Notice>
          </div>
        ) : null}
      </Section>
      <div className="mt-7.5 grid grid-cols-[minmax(0,2fr)_minmax(0,1fr)] gap-12 phone:block">
        <Section title="Problems" sub={`in the first ${preview.firstRows.toLocaleString('en-US')} rows`}>
          {found.length === 0 ? <p className="text-ink-2">None found so far.</p> : <ProblemTable problems={found} />}
        </Section>
        <Section title="As read" sub={`from row ${preview.dialect.firstDataRow}`} className="phone:mt-7.5">
          <Table caption="The first rows as read" dense>
            <tbody>
              {preview.rows.map((row, index) => (
                <tr key={index}>
                  <td className="text-ink-3">{preview.dialect.firstDataRow + index}</td>
                  {row.slice(0, 5).map((cell, place) => (
                    <td key={place} className="whitespace-nowrap italic">
                      {cell}
                    </td>
                  ))}
                </tr>
              ))}
            </tbody>
          </Table>
        </Section>
      </div>
    </form>
  );
}
