import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import type { ExportShape } from '@/lib/trends/gallery';

/** The shapes of one kind with an example each; on a phone each shape is a paragraph. */
export function ShapeTable({ title, shapes }: { title: string; shapes: readonly ExportShape[] }) {
  return (
    <Table caption={title} dense className="phone:block phone:[&_tbody]:block">
      <thead className="phone:sr-only">
        <tr>
          <HeadCell>shape</HeadCell>
          <HeadCell>as it stands in a file</HeadCell>
        </tr>
      </thead>
      <tbody>
        {shapes.map(({ id, shape, example, note, asks }) => (
          <tr
            key={id}
            className="phone:block phone:border-b phone:border-grid phone:py-1.5 phone:[&>*]:block phone:[&>*]:border-0! phone:[&>*]:p-0!"
          >
            <RowHead className="w-[40%] text-pretty phone:w-auto">
              <span className="font-semibold">{shape}</span>
              {note === undefined ? null : <span className="block text-small font-normal text-ink-2">{note}</span>}
              {asks === undefined ? null : (
                <span className="block text-small font-normal text-ink-2">You are asked {asks}.</span>
              )}
            </RowHead>
            <Cell>
              <Example text={example} />
            </Cell>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

/** Lines of a file, a tab shown as a gap. */
function Example({ text }: { text: string }) {
  return (
    <code className="font-sans text-small">
      {text.split('\n').map((line, index) => (
        <span key={index} className="block [overflow-wrap:anywhere] whitespace-pre-wrap">
          {line.replaceAll('\t', '    ')}
        </span>
      ))}
    </code>
  );
}
