import { Column, Row } from '@react-email/components';
import type { CSSProperties } from 'react';
import { formatClock, localParts } from '../client/format-time';
import type { HourBar } from './daily-mail-model';
import { LIGHT } from './inks';
import { MARK_PIXELS, stripBars, type StripBar } from './strip-bars';

const LABEL_EVERY_HOURS = 6;
const still: CSSProperties = { borderTop: `2px solid ${LIGHT.ink}` };
const hidden: CSSProperties = { fontSize: 0, lineHeight: 0 };

/**
 * The day's bypass flow as table cells, one an hour: no image that a client could leave out, reverse cells marked `/` where
 * they are tall enough. Hidden from readers, because the table of stretches under it says the same.
 */
export function Strip({ hours, timeZone }: { hours: readonly HourBar[]; timeZone: string }) {
  const { bars, upPixels, downPixels } = stripBars(hours);
  const width = `${(100 / Math.max(1, bars.length)).toFixed(3)}%`;
  return (
    <div aria-hidden="true">
      <Row style={{ tableLayout: 'fixed' }}>
        {bars.map((bar) => (
          <Column key={bar.startMs} width={width} style={{ height: upPixels, verticalAlign: 'bottom', padding: 0 }}>
            {bar.upPixels > 0 ? (
              <div className="fwd" style={{ ...hidden, ...inset, height: bar.upPixels, backgroundColor: LIGHT.fwd }} />
            ) : null}
          </Column>
        ))}
      </Row>
      <Row style={{ tableLayout: 'fixed' }}>
        {bars.map((bar) => (
          <Column
            key={bar.startMs}
            width={width}
            className="line"
            style={{ ...(bar.kind === 'no-data' ? {} : still), height: downPixels, verticalAlign: 'top', padding: 0 }}
          >
            <Below bar={bar} />
          </Column>
        ))}
      </Row>
      <Labels hours={hours} timeZone={timeZone} />
    </div>
  );
}

const inset: CSSProperties = { marginRight: 1 };

/** What hangs from the still line: the backward bar, the bead of a still hour, the broken outline of an unknown one. */
function Below({ bar }: { bar: StripBar }) {
  if (bar.kind === 'still' || bar.kind === 'unknown') {
    const outline = `1px ${bar.kind === 'still' ? 'solid' : 'dashed'} ${LIGHT.ink}`;
    return <div className="line" style={{ ...hidden, ...inset, height: 4, border: outline, borderTop: 'none' }} />;
  }
  if (bar.downPixels === 0) return null;
  const look: CSSProperties = {
    height: bar.downPixels,
    overflow: 'hidden',
    backgroundColor: LIGHT.rev,
    color: LIGHT.paper,
    textAlign: 'center',
    fontSize: bar.marks > 0 ? 11 : 0,
    lineHeight: bar.marks > 0 ? `${MARK_PIXELS}px` : 0,
  };
  return (
    <div className="rev" style={{ ...inset, ...look }}>
      {Array.from({ length: bar.marks }, (_, line) => (
        <span key={line}>
          /<br />
        </span>
      ))}
    </div>
  );
}

/** Clock times under the strip, each as wide as the hours up to the next. */
function Labels({ hours, timeZone }: { hours: readonly HourBar[]; timeZone: string }) {
  const starts = hours.flatMap((hour, at) => {
    const { hour: clock, minute } = localParts(hour.startMs, timeZone);
    const repeated = at > 0 && localParts(hours[at - 1]?.startMs ?? NaN, timeZone).hour === clock;
    return minute === 0 && clock % LABEL_EVERY_HOURS === 0 && !repeated ? [at] : [];
  });
  if (starts[0] !== 0) starts.unshift(0);
  return (
    <Row style={{ tableLayout: 'fixed' }}>
      {starts.map((at, place) => {
        const span = (starts[place + 1] ?? hours.length) - at;
        return (
          <Column
            key={at}
            colSpan={span}
            width={`${((100 * span) / Math.max(1, hours.length)).toFixed(3)}%`}
            className="ink2"
            style={{ color: LIGHT.ink2, fontSize: 12, lineHeight: '18px', textAlign: 'left' }}
          >
            {formatClock(hours[at]?.startMs ?? NaN, timeZone)}
          </Column>
        );
      })}
    </Row>
  );
}
