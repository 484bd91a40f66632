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
          <HeadCell>read as</HeadCell>
        </tr>
      </thead>
      <tbody>
        {shapes.map(({ id, shape, example, note, asks }) => (
          <tr
            key={id}
            className="phone:block phone:border-b phone:border-grid phone:py-1.5 phone:[&>*]:block phone:[&>*]:border-0! phone:[&>*]:p-0!"
          >
            <RowHead className="w-[27%] font-semibold! text-pretty phone:w-auto">{shape}</RowHead>
            <Cell className="w-[42%] phone:w-auto">
              <Example text={example} />
            </Cell>
            <Cell className="text-pretty text-ink-2">
              {asks === undefined ? note : `${note === undefined ? '' : `${note} `}You are asked ${asks}.`}
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
