import { Text } from '@react-email/components';
import type { CSSProperties } from 'react';
import { NO_BREAK_SPACE } from '../client/format';
import type { DailyMailModel } from './daily-mail-model';
import { LIGHT } from './inks';
import { factWords, stretchesNote, stretchWords } from './sentences';
import { base, ink, ink2, ruled, small } from './styles';

const cell: CSSProperties = {
  ...base,
  ...ink,
  padding: '8px 0',
  fontSize: 17,
  lineHeight: '20px',
  textAlign: 'left',
  fontWeight: 400,
};
const head: CSSProperties = { ...small, padding: '0 0 5px', textAlign: 'left', fontWeight: 400, ...ruled };
const toTheRight: CSSProperties = { textAlign: 'right' };

/** The stretches of reverse flow: when, how much, how warm; the one with the largest flow in bold. */
export function Stretches({ model }: { model: DailyMailModel }) {
  const rows = stretchWords(model);
  const note = stretchesNote(model);
  if (rows.length === 0) return null;
  return (
    <>
      <table width="100%" cellPadding={0} cellSpacing={0} style={{ borderCollapse: 'collapse', marginTop: 12 }}>
        <thead>
          <tr>
            {['reverse', 'largest', 'warmest supply'].map((name, at) => (
              <th key={name} scope="col" className="ink2 rule" style={at === 0 ? head : { ...head, ...toTheRight }}>
                {name}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row, at) => {
            const look = { ...cell, ...(row.worst ? { fontWeight: 600 } : {}), ...(at < rows.length - 1 ? ruled : {}) };
            return (
              <tr key={row.times}>
                <th scope="row" className="ink rule" style={{ ...look, whiteSpace: 'nowrap' }}>
                  {row.times}
                </th>
                <td className="ink rule" style={{ ...look, ...toTheRight }}>
                  {row.largest}
                </td>
                <td className="ink rule" style={{ ...look, ...toTheRight }}>
                  {row.warmest}
                </td>
              </tr>
            );
          })}
        </tbody>
      </table>
      {note === null ? null : (
        <Text className="ink2" style={{ ...small, margin: '4px 0 0' }}>
          {note}
        </Text>
      )}
    </>
  );
}

/** The day in four figures. */
export function Facts({ model }: { model: DailyMailModel }) {
  return (
    <table
      width="100%"
      cellPadding={0}
      cellSpacing={0}
      className="rule"
      style={{ borderCollapse: 'collapse', marginTop: 14, borderTop: `1px solid ${LIGHT.rule}` }}
    >
      <tbody>
        {factWords(model).map((fact) => (
          <tr key={fact.label}>
            <th scope="row" className="ink2 rule" style={{ ...cell, ...ink2, ...ruled, fontSize: 15 }}>
              {fact.label}
            </th>
            <td className="ink rule" style={{ ...cell, ...ruled, ...toTheRight }}>
              <b style={{ fontWeight: 600 }}>{fact.figure}</b>
              {fact.unit === '' ? null : (
                <span className="ink2" style={{ ...ink2, fontSize: 13 }}>
                  {NO_BREAK_SPACE}
                  {fact.unit.replace(/ /g, NO_BREAK_SPACE)}
                </span>
              )}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
