import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { cleanup, fireEvent, render, screen, waitFor, within } from '@testing-library/react';
import { afterEach, expect, test, vi } from 'vitest';
import { FeedSection } from '@/components/uploads/feed-section';
import { MappingForm } from '@/components/uploads/mapping-columns';
import { UploadTable } from '@/components/uploads/upload-table';
import type { ConfirmMapping, Preview, Upload } from '@/lib/schemas/upload';
import { preview, previewColumn, previewTable } from '../support/preview';

vi.mock('next/link', () => ({ default: 'a' }));
const push = vi.fn();
vi.mock('next/navigation', () => ({ useRouter: () => ({ push, replace: vi.fn() }) }));
const realFetch = globalThis.fetch;
afterEach(() => {
  cleanup();
  globalThis.fetch = realFetch;
  push.mockReset();
});

const PLANT = '7b0c6f0e-4a53-4b57-9a0e-0d6f5a1c2e3f';
const upload = (part: Partial<Upload> = {}): Upload => ({
  id: 'u1',
  plantId: PLANT,
  filename: 'week.csv',
  sizeBytes: 1000,
  sha256: 'a',
  status: 'needs-mapping',
  progress: 0,
  rowsRead: 0,
  samplesStored: 0,
  from: null,
  to: null,
  problems: [],
  createdAt: '2026-07-20T08:00:00Z',
  finishedAt: null,
  ...part,
});

interface Sent {
  method: string;
  path: string;
  body: unknown;
}
/** Answers the API by path and keeps what was sent. */
function serve(answers: Readonly<Record<string, { status?: number; body?: unknown }>>): Sent[] {
  const sent: Sent[] = [];
  globalThis.fetch = (input, init = {}) => {
    const url = input as string;
    const method = init.method ?? 'GET';
    const path = url.replace('/api/v1', '');
    sent.push({ method, path, body: typeof init.body === 'string' ? JSON.parse(init.body) : undefined });
    const answer = answers[`${method} ${path.split('?')[0] ?? ''}`];
    const status = answer?.status ?? (answer ? 200 : 404);
    return Promise.resolve(new Response(status === 204 ? null : JSON.stringify(answer?.body ?? {}), { status }));
  };
  return sent;
}

const shown = (node: React.ReactNode) => {
  const client = new QueryClient({ defaultOptions: { queries: { retry: false } } });
  return render(<QueryClientProvider client={client}>{node}</QueryClientProvider>);
};
const mapping = (found: Preview, part: Partial<Upload> = {}) =>
  shown(
    <MappingForm plantId={PLANT} upload={upload(part)} preview={found} unitCount={2} mayConfirm closedBecause={null} />,
  );
const bodyOf = (sent: readonly Sent[]) => sent.find(({ method }) => method === 'PUT')?.body as ConfirmMapping;

test('a truly ambiguous day is a question with two readings; the answer goes to the API', async () => {
  const sent = serve({ 'PUT /uploads/u1/mapping': { status: 202, body: {} } });
  const message = '"07/08/2026 00:05" can be read with the month or the day first.';
  mapping(
    preview({
      problems: [{ code: 'day-or-month', severity: 'warning', message, column: 'Timestamp', row: 2, count: 1 }],
    }),
  );
  expect(screen.getByText('8 July 2026, 00:05')).toBeTruthy();
  const question = screen.getByRole('group', { name: /Day or month first/ });
  expect(within(question).getByRole('radio', { name: /Month first/ })).toHaveProperty('checked', true);
  // Asked once, beside the times, and not again as a problem.
  expect(screen.queryByText(message)).toBeNull();
  fireEvent.click(within(question).getByRole('radio', { name: /Day first/ }));
  expect(screen.getByText('7 August 2026, 00:05')).toBeTruthy();
  fireEvent.click(screen.getByRole('button', { name: 'Confirm and import' }));
  await waitFor(() => expect(push).toHaveBeenCalled());
  expect(bodyOf(sent).timestamp.form).toBe('day/month/year');
});

test('a column whose role another file’s point has already is asked which of the two it is', () => {
  const columns = [previewColumn('East FM', { role: 'secondaryFlow', unit: 'gpm' }), previewColumn('CHWS')];
  mapping(preview({ columns, carried: [{ role: 'secondaryFlow', unitIndex: 0, names: ['S Flow'] }] }));
  const question = screen.getByRole('combobox', { name: 'Whether East FM is another point than S Flow' });
  expect(question.textContent).toContain('goes on with “S Flow”');
  expect(screen.queryByRole('combobox', { name: /Whether CHWS/ })).toBeNull();
});

test('what earlier files settled is folded away; what is new is there', () => {
  const columns = [
    previewColumn('OLD.1', { known: true }),
    previewColumn('OLD.2', { known: true, role: 'primaryReturnTemp' }),
    previewColumn('NEW', { confidence: 0.2 }),
  ];
  mapping(preview({ columns }));
  expect(screen.queryByRole('rowheader', { name: 'OLD.1' })).toBeNull();
  expect(screen.getByRole('rowheader', { name: 'NEW' })).toBeTruthy();
  fireEvent.click(screen.getByRole('button', { name: '2 columns read as in earlier files' }));
  expect(screen.getByRole('rowheader', { name: 'OLD.1' })).toBeTruthy();
});

test('two thousand points: forty rows at a time, found by name, the undecided left out at once and back by undo', () => {
  const columns = Array.from({ length: 2000 }, (_, index) =>
    previewColumn(`P${index}`, index === 0 ? {} : { confidence: 0.2 }),
  );
  const shape = { kind: 'long' as const, point: 'Name', value: 'Value', status: null, unit: null };
  mapping(preview({ tables: [previewTable({ shape })], columns }));
  const heads = () => screen.getAllByRole('rowheader').map(({ textContent }) => textContent);
  expect(heads()).toHaveLength(40);
  fireEvent.click(screen.getByRole('button', { name: 'Next' }));
  expect(heads()[0]).toBe('P40');
  fireEvent.change(screen.getByRole('searchbox', { name: 'Find points by name or role' }), {
    target: { value: 'p1999' },
  });
  expect(heads()).toEqual(['P1999']);
  expect(screen.getByText(/1,999 points still need/)).toBeTruthy();
  fireEvent.click(screen.getByRole('button', { name: 'leave out all 1,999 undecided' }));
  expect(screen.getByText('Every point is decided.')).toBeTruthy();
  fireEvent.click(screen.getByRole('button', { name: 'Undo' }));
  expect(screen.getByText(/1,999 points still need/)).toBeTruthy();
});

test('a drop of several headings shows each with its files and how they are written', () => {
  const { dialect } = previewTable();
  const tables = [
    previewTable({ files: ['loop.csv', 'loop (2).csv'], dialect: { ...dialect, delimiter: ';', decimal: ',' } }),
    previewTable({ files: ['plant.xlsx: Pumps'], timestamp: { columns: ['t'], form: 'iso' }, rows: [] }),
  ];
  mapping(preview({ tables, columns: [previewColumn('A'), previewColumn('B', { table: 1 })] }));
  const head = screen.getByRole('rowheader', { name: /loop\.csv, loop \(2\)\.csv/ });
  expect(head.textContent).toContain('2 files with one heading; a column a point; semicolon, UTF-8, decimal comma');
  expect(screen.getByRole('rowheader', { name: /plant\.xlsx: Pumps/ })).toBeTruthy();
});

test('a clock that is off: the shift it proposes is one click, for that table alone', async () => {
  const sent = serve({ 'PUT /uploads/u1/mapping': { status: 202, body: {} } });
  const message = '"B" changes 1 h after "A" (90 % of steps match so). If so, shift the times of "B" by -1 h.';
  const tables = [previewTable({ files: ['a.csv'] }), previewTable({ files: ['b.csv'] })];
  mapping(
    preview({
      tables,
      columns: [previewColumn('A'), previewColumn('B', { table: 1, role: 'primaryReturnTemp' })],
      problems: [{ code: 'clock-offset', severity: 'warning', message, count: 1 }],
    }),
  );
  fireEvent.click(screen.getByRole('button', { name: /^table by table/ }));
  fireEvent.click(screen.getByRole('button', { name: /^Shift by/ }));
  fireEvent.click(screen.getByRole('button', { name: 'Confirm and import' }));
  await waitFor(() => expect(push).toHaveBeenCalled());
  expect(bodyOf(sent).tables?.map(({ timestamp }) => timestamp.shiftMinutes)).toEqual([0, -60]);
});

test('of a file that was read the confirmed mapping is shown, and only a change can be confirmed', () => {
  const timestamp = { columns: ['Timestamp'], form: 'month/day/year' as const };
  const confirmed: ConfirmMapping = {
    timestamp,
    timeZone: 'America/Denver',
    remember: true,
    columns: [{ column: 'CHWS', role: 'secondarySupplyTemp', unit: 'degC' }],
  };
  mapping(preview({ confirmed }), { status: 'done' });
  expect(screen.getByRole('combobox', { name: 'Role of CHWS' }).textContent).toBe('secondary supply temperature');
  const confirm = screen.getByRole('button', { name: 'Confirm and read again' });
  expect(confirm).toHaveProperty('disabled', true);
  fireEvent.change(screen.getByLabelText('time zone of the times'), { target: { value: 'UTC' } });
  expect(confirm).toHaveProperty('disabled', false);
});

const table = (uploads: readonly Upload[]) =>
  shown(
    <UploadTable
      plantId={PLANT}
      timeZone="UTC"
      uploads={uploads}
      sending={{ files: [], send: vi.fn(), stop: vi.fn() }}
      may={{ map: true, remove: true }}
    />,
  );

test('the same file again, and a file left out, are said in the list without opening anything', () => {
  const problem = (code: string, message: string) => ({ code, severity: 'warning' as const, message, count: 1 });
  const problems = [
    problem('same-file', 'Byte for byte the same as "week.csv".'),
    problem('file-left-out', '"notes.csv" was left out.'),
    problem('gap', 'Three hours are missing.'),
  ];
  table([upload({ status: 'done', problems })]);
  expect(screen.getByText('same file again')).toBeTruthy();
  expect(screen.getByText(/"notes.csv" was left out/)).toBeTruthy();
  expect(screen.queryByText('Three hours are missing.')).toBeNull();
});

test('a mapping can be changed where a file was read, and where it failed after its columns were known', async () => {
  serve({
    'GET /uploads/known/preview': { body: preview() },
    'GET /uploads/unknown/preview': { status: 409, body: {} },
  });
  table([
    upload({ id: 'read', filename: 'read.csv', status: 'done' }),
    upload({ id: 'known', filename: 'known.csv', status: 'failed' }),
    upload({ id: 'unknown', filename: 'unknown.csv', status: 'failed' }),
    upload({ id: 'busy', filename: 'busy.csv', status: 'importing' }),
  ]);
  await screen.findByText('change mapping', { selector: '[aria-label$="known.csv"]' });
  const links = screen.getAllByText('change mapping').map((link) => link.getAttribute('aria-label'));
  expect(links).toEqual(['change the mapping of read.csv', 'change the mapping of known.csv']);
});

const token = (name: string, part: Record<string, unknown> = {}) => ({
  id: 'a3f1c2d4-1111-4222-8333-444455556666',
  organizationId: 'b3f1c2d4-1111-4222-8333-444455556666',
  name,
  scope: 'ingest',
  plantId: PLANT,
  createdAt: '2026-07-01T08:00:00Z',
  expiresAt: null,
  lastUsedAt: null,
  ...part,
});

test('a feed: the token is made for this plant alone and stands in the line once; only this plant’s tokens are listed', async () => {
  const id = 'c3f1c2d4-1111-4222-8333-444455556666';
  const sent = serve({
    'GET /tokens': {
      body: {
        items: [
          token('Night job', { lastUsedAt: '2026-07-02T08:00:00Z' }),
          token('Reader', { scope: 'read' }),
          token('Elsewhere', { plantId: 'd3f1c2d4-1111-4222-8333-444455556666' }),
        ],
        nextCursor: null,
      },
    },
    'POST /tokens': { status: 201, body: { id, token: 'slw_secret' } },
  });
  shown(<FeedSection plantId={PLANT} timeZone="UTC" mayManage />);
  const line = () => screen.getByLabelText('Line that uploads a file').textContent;
  expect(line()).toContain(
    `Bearer TOKEN" -F "file=@export.csv" ${window.location.origin}/api/v1/plants/${PLANT}/uploads`,
  );
  const list = await screen.findByRole('table', { name: 'Tokens that upload to this plant' });
  expect(
    within(list)
      .getAllByRole('rowheader')
      .map(({ textContent }) => textContent),
  ).toEqual(['Night job']);
  expect(within(list).getByText(/2.Jul 08:00/)).toBeTruthy();
  fireEvent.click(screen.getByRole('button', { name: 'Make a token' }));
  await waitFor(() => expect(line()).toContain('Bearer slw_secret'));
  expect(sent.find(({ method }) => method === 'POST')?.body).toEqual({
    plantId: PLANT,
    name: 'Nightly export',
    scope: 'ingest',
  });
});

test('a token is revoked after one question', async () => {
  const { id } = token('Night job');
  const sent = serve({
    'GET /tokens': { body: { items: [token('Night job')], nextCursor: null } },
    [`DELETE /tokens/${id}`]: { status: 204 },
  });
  shown(<FeedSection plantId={PLANT} timeZone="UTC" mayManage />);
  fireEvent.click(await screen.findByRole('button', { name: 'revoke Night job' }));
  expect(sent.some(({ method }) => method === 'DELETE')).toBe(false);
  fireEvent.click(screen.getByRole('button', { name: 'Revoke' }));
  await waitFor(() => expect(sent.some(({ method }) => method === 'DELETE')).toBe(true));
});

test('who may not make tokens sees the line and who can', () => {
  const sent = serve({});
  shown(<FeedSection plantId={PLANT} timeZone="UTC" mayManage={false} />);
  expect(screen.getByText(/An engineer or the owner/)).toBeTruthy();
  expect(screen.queryByRole('button', { name: 'Make a token' })).toBeNull();
  expect(sent).toEqual([]);
});
