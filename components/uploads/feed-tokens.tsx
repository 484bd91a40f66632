'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { toast } from 'sonner';
import { Button, TextButton } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatDayTime, formatDayYear } from '@/lib/client/format-time';
import { ingestTokensQuery, revokeToken, type IngestToken } from '@/lib/client/ingest-tokens';

export interface FeedTokensProps {
  plantId: string;
  timeZone: string;
  tokens: readonly IngestToken[];
  onRevoked: (id: string) => void;
}

/** The tokens that upload to this plant, and the way to end one. */
export function FeedTokens({ plantId, timeZone, tokens, onRevoked }: FeedTokensProps) {
  const queries = useQueryClient();
  const [asked, setAsked] = useState<IngestToken | null>(null);
  const revoke = useMutation({
    mutationFn: (token: IngestToken) => revokeToken(token.id),
    onSuccess: async (_, token) => {
      setAsked(null);
      onRevoked(token.id);
      await queries.invalidateQueries({ queryKey: ingestTokensQuery(plantId).queryKey });
    },
    onError: (error) => toast.error(error.message),
  });
  if (tokens.length === 0) return null;
  return (
    <div className="mt-6 max-w-[860px]">
      <Table caption="Tokens that upload to this plant">
        <thead>
          <tr>
            <HeadCell>token</HeadCell>
            <HeadCell numeric>made</HeadCell>
            <HeadCell numeric>last used</HeadCell>
            <HeadCell numeric>
              <span className="sr-only">what can be done</span>
            </HeadCell>
          </tr>
        </thead>
        <tbody>
          {tokens.map((token) => (
            <tr key={token.id}>
              <RowHead className="font-semibold! break-words">{token.name}</RowHead>
              <Cell numeric className="text-ink-2">
                {formatDayYear(Date.parse(token.createdAt), timeZone)}
              </Cell>
              <Cell numeric>
                {token.lastUsedAt === null ? 'never' : formatDayTime(Date.parse(token.lastUsedAt), timeZone)}
              </Cell>
              <Cell numeric>
                <TextButton aria-label={`revoke ${token.name}`} onClick={() => setAsked(token)}>
                  revoke
                </TextButton>
              </Cell>
            </tr>
          ))}
        </tbody>
      </Table>
      <Dialog
        open={asked !== null}
        onOpenChange={(open) => {
          if (!open) setAsked(null);
        }}
        title="Revoke this token?"
        description={
          asked === null
            ? ''
            : `A feed that uses “${asked.name}” is refused from now on. What it has uploaded stays. This cannot be taken back; a new token takes a moment.`
        }
        footer={
          <>
            <Button onClick={() => setAsked(null)}>Keep it</Button>
            <Button
              variant="primary"
              disabled={revoke.isPending}
              onClick={() => {
                if (asked !== null) revoke.mutate(asked);
              }}
            >
              Revoke
            </Button>
          </>
        }
      />
    </div>
  );
}
