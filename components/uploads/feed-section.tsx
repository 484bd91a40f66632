'use client';
import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState, useSyncExternalStore } from 'react';
import { Button } from '@/components/ui/button';
import { Field, Input } from '@/components/ui/field';
import { Section } from '@/components/ui/section';
import { ErrorState, Notice } from '@/components/ui/states';
import { createIngestToken, curlLine, ingestTokensQuery, TOKEN_PLACE } from '@/lib/client/ingest-tokens';
import { CopyButton } from './copy-button';
import { FeedTokens } from './feed-tokens';

export interface FeedSectionProps {
  plantId: string;
  timeZone: string;
  mayManage: boolean;
}

const never = () => () => undefined;
/** The address in this browser; a placeholder while the server draws the page. */
const useOrigin = (): string =>
  useSyncExternalStore(
    never,
    () => window.location.origin,
    () => 'https://…',
  );

/** How a nightly export gets here by itself: one line to paste, a token made in place, and the tokens there are. */
export function FeedSection({ plantId, timeZone, mayManage }: FeedSectionProps) {
  const origin = useOrigin();
  const queries = useQueryClient();
  const [name, setName] = useState('Nightly export');
  const tokens = useQuery({ ...ingestTokensQuery(plantId), enabled: mayManage });
  const create = useMutation({
    mutationFn: () => createIngestToken(plantId, name.trim()),
    onSuccess: () => queries.invalidateQueries({ queryKey: ingestTokensQuery(plantId).queryKey }),
  });
  const made = create.data?.token ?? null;
  const line = curlLine(origin, plantId, made);
  return (
    <Section
      id="feed"
      title="Nightly feed"
      sub="the building system’s own export, sent by one line"
      className="mt-7.5 scroll-mt-4"
    >
      <div className="grid grid-cols-[minmax(0,1fr)_440px] gap-x-12 gap-y-6 phone:block">
        <div className="min-w-0">
          <pre
            aria-label="Line that uploads a file"
            tabIndex={0}
            className="overflow-x-auto border-l-[3px] border-ink bg-tint px-3.5 py-2.5 text-small leading-5 [overflow-wrap:anywhere] whitespace-pre-wrap"
          >
            {line}
          </pre>
          <div className="mt-2.5 flex flex-wrap items-center gap-x-4 gap-y-2">
            <CopyButton text={line}>{made === null ? 'Copy the line' : 'Copy the line with its token'}</CopyButton>
            {made === null ? (
              <span className="text-ink-2">
                {mayManage ? (
                  <>Make a token below; it takes the place of {TOKEN_PLACE}.</>
                ) : (
                  <>
                    An engineer or the owner of this organization can make the token that takes the place of{' '}
                    {TOKEN_PLACE}.
                  </>
                )}
              </span>
            ) : null}
          </div>
          {made === null ? null : (
            <div className="mt-3">
              <Notice live>
                The token stands in the line above, <b>this once</b>: copy it now. Slackwater keeps no readable copy. If
                it is lost, make another and revoke this one.
              </Notice>
            </div>
          )}
          {mayManage ? (
            <form
              aria-label="New token"
              className="mt-4 flex flex-wrap items-end gap-2.5"
              onSubmit={(event) => {
                event.preventDefault();
                if (name.trim() !== '' && !create.isPending) create.mutate();
              }}
            >
              <Field label="name of the token" className="w-[260px] phone:w-full">
                {(ids) => (
                  <Input
                    {...ids}
                    value={name}
                    maxLength={120}
                    autoComplete="off"
                    onChange={(event) => setName(event.target.value)}
                  />
                )}
              </Field>
              <Button
                type="submit"
                className="min-h-9 phone:min-h-11"
                disabled={create.isPending || name.trim() === ''}
              >
                {create.isPending ? 'Making' : made === null ? 'Make a token' : 'Make another'}
              </Button>
            </form>
          ) : null}
          {create.error ? (
            <div className="mt-3">
              <Notice live>{create.error.message}</Notice>
            </div>
          ) : null}
        </div>
        <ul className="list-none space-y-1.5 text-ink-2 phone:mt-6">
          <li>
            <b className="text-ink">What the token may do:</b> upload to this plant and read back what it uploaded.
            Nothing else: no results, no settings, no other plant.
          </li>
          <li>
            <b className="text-ink">Sending twice is safe:</b> the same file again is recognised byte for byte, and days
            that overlap are filled once; the later file wins where both have a value.
          </li>
          <li>
            <b className="text-ink">The first file is mapped by you,</b> here; the next of that heading go straight
            through. A changed heading asks only about what is new.
          </li>
          <li>
            <b className="text-ink">On Windows</b> write <code>curl.exe</code> and put the line into a task of the Task
            Scheduler; elsewhere into cron.
          </li>
        </ul>
      </div>
      {!mayManage ? null : tokens.error ? (
        <ErrorState onRetry={() => void tokens.refetch()}>{tokens.error.message}</ErrorState>
      ) : (
        <FeedTokens
          plantId={plantId}
          timeZone={timeZone}
          tokens={tokens.data ?? []}
          onRevoked={(id) => {
            if (create.data?.id === id) create.reset();
          }}
        />
      )}
    </Section>
  );
}
