import Link from 'next/link';
import { Fragment, type ReactNode } from 'react';
import { CAUTION } from '@/lib/client/words';

/** The page that explains the method; open to everyone. */
export const METHOD_PATH = '/method';
/** The page that lists what files are read; open to everyone. */
export const FORMATS_PATH = '/formats';

export interface FootProps {
  settingsRevision?: number;
  /** Number of the calibration; 0: none. */
  calibrationId?: number;
  kernelVersion?: string;
  timeZone?: string;
  /** In place of the three, where a page is of no one plant. */
  right?: ReactNode;
}

/** The foot of every page: the caution, how numbers are worked out, and what these rest on. */
export function Foot({ settingsRevision, calibrationId, kernelVersion, timeZone, right }: FootProps) {
  const parts = [
    settingsRevision === undefined ? null : `Settings revision ${settingsRevision}`,
    calibrationId === undefined || calibrationId === 0 ? null : `calibration ${calibrationId}`,
    kernelVersion === undefined ? null : `kernel ${kernelVersion}`,
    timeZone === undefined ? null : `times ${timeZone}`,
  ].filter((part) => part !== null);
  return (
    <footer className="page pt-12 pb-8 phone:pt-10">
      <div className="flex justify-between gap-11 border-t border-ink pt-2.5 text-small text-ink-2 phone:block">
        <p className="max-w-[880px]">
          {CAUTION}{' '}
          <Link href={METHOD_PATH} className="link whitespace-nowrap">
            How it is worked out
          </Link>
        </p>
        <p className="shrink-0 text-end phone:mt-2 phone:text-start">
          {right ??
            parts.map((part, index) => (
              <Fragment key={part}>
                {index === 0 ? null : ' · '}
                <span className="whitespace-nowrap">{part}</span>
              </Fragment>
            ))}
        </p>
      </div>
    </footer>
  );
}
