'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import { useCallback, useState } from 'react';
import { plantPath } from '@/components/shell/tabs';
import { Section } from '@/components/ui/section';
import { Notice } from '@/components/ui/states';
import { Table } from '@/components/ui/table';
import { useKeys } from '@/components/ui/use-keys';
import { sendJson } from '@/lib/client/api';
import { formatNumber } from '@/lib/client/format';
import { uploadQuery, uploadsQuery } from '@/lib/client/queries';
import { filesWords } from '@/lib/client/table-words';
import type { Preview, Upload } from '@/lib/schemas/upload';
import { ConfirmBar } from './confirm-bar';
import { mappingBody, nounOf, openColumns, timesProblem, withoutOpen, type ColumnAnswer } from './mapping-form';
import { MappingList } from './mapping-list';
import { isTimeDoubt } from './mapping-times';
import { ProblemTable } from './problem-table';
import { TimesSection } from './times-section';
import { useAnswers } from './use-answers';

export interface MappingFormProps {
  plantId: string;
  upload: Upload;
  preview: Preview;
  unitCount: number;
  mayConfirm: boolean;
  /** Why nothing can be changed, where that is so. */
  closedBecause: string | null;
}

/** The times, the columns and their answers, undo, and the confirmation that lets the import go on or has it done again. */
export function MappingForm({ plantId, upload, preview, unitCount, mayConfirm, closedBecause }: MappingFormProps) {
  const router = useRouter();
  const queries = useQueryClient();
  const { answers, change, undo, changed } = useAnswers(preview);
  const [remember, setRemember] = useState(true);
  const again = upload.status !== 'needs-mapping';
  const open = openColumns(answers.columns);
  const wrong = timesProblem(answers);
  const ready = mayConfirm && open.length === 0 && wrong === null && (!again || changed);
  useKeys({ u: undo });
  const changeColumn = useCallback(
    (next: ColumnAnswer) =>
      change((now) => ({
        ...now,
        columns: now.columns.map((answer) => (answer.column === next.column ? next : answer)),
      })),
    [change],
  );
  const confirm = useMutation({
    mutationFn: () => sendJson('PUT', `/uploads/${upload.id}/mapping`, mappingBody(preview, answers, remember)),
    onSuccess: () => {
      router.push(plantPath(plantId, 'uploads'));
      void queries.invalidateQueries({ queryKey: uploadsQuery(plantId).queryKey });
      // How it was read is part of the preview: the upload and its preview are asked for anew when this page is opened again.
      void queries.invalidateQueries({ queryKey: uploadQuery(upload.id).queryKey, refetchType: 'none' });
    },
  });
  // Confirmed once is enough: the next page is on its way.
  const busy = confirm.isPending || confirm.isSuccess;
  const found = (upload.problems.length > 0 ? upload.problems : preview.problems).filter((each) => !isTimeDoubt(each));
  const someNew = preview.columns.some(({ known }) => known !== true);
  return (
    <form
      aria-label="How the file is read"
      onSubmit={(event) => {
        event.preventDefault();
        if (ready && !busy) confirm.mutate();
      }}
    >
      <TimesSection
        preview={preview}
        times={answers.times}
        timeZone={answers.timeZone}
        disabled={!mayConfirm}
        onTimes={(times, field) => change((now) => ({ ...now, times }), field)}
        onZone={(timeZone) => change((now) => ({ ...now, timeZone }), 'zone')}
      />
      <Section
        title={nounOf(preview) === 'point' ? 'Points' : 'Columns'}
        sub="suggested role, why, and the data itself"
      >
        <MappingList
          preview={preview}
          answers={answers.columns}
          unitCount={unitCount}
          disabled={!mayConfirm}
          foldKnown={someNew && !again}
          onChange={changeColumn}
          onLeaveOutOpen={() => change((now) => ({ ...now, columns: withoutOpen(now.columns) }))}
        />
        {closedBecause === null ? (
          <ConfirmBar
            noun={nounOf(preview)}
            openCount={open.length}
            wrong={wrong}
            again={again}
            changed={changed}
            ready={ready}
            busy={busy}
            remember={remember}
            onRemember={setRemember}
            onUndo={undo}
          />
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
        <Section
          title="Problems"
          sub={
            again && upload.problems.length > 0
              ? 'in the whole file'
              : `in the first ${formatNumber(preview.firstRows)} rows`
          }
        >
          {found.length === 0 ? <p className="text-ink-2">None found so far.</p> : <ProblemTable problems={found} />}
        </Section>
        <Section title="As read" className="phone:mt-7.5">
          {preview.tables.slice(0, MOST_SHOWN).map((table, index) => (
            <FirstRows key={index} table={table} named={preview.tables.length > 1} />
          ))}
        </Section>
      </div>
    </form>
  );
}

/** Tables of which the first rows are shown. */
const MOST_SHOWN = 4;

/** The first rows of one heading's first file, cell by cell. */
function FirstRows({ table, named }: { table: Preview['tables'][number]; named: boolean }) {
  const { files, rows, dialect } = table;
  return (
    <div className="mb-4">
      {named ? <p className="mb-1 break-words text-ink-2">{filesWords(files.slice(0, 1))}</p> : null}
      <Table caption={`The first rows as read${named ? ` of ${files[0] ?? ''}` : ''}`} dense>
        <tbody>
          {rows.map((row, index) => (
            <tr key={index}>
              <td className="text-ink-3">{dialect.firstDataRow + index}</td>
              {row.slice(0, 5).map((cell, place) => (
                <td key={place} className="whitespace-nowrap italic">
                  {cell}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}
