'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { toast } from 'sonner';
import { Button, TextButton } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { sendJson } from '@/lib/client/api';
import { formatPeriod } from '@/lib/client/format-time';
import type { Upload } from '@/lib/schemas/upload';

/** Takes a file's values out again, after one question that says which days are worked out anew. */
export function RemoveUpload({ plantId, upload, timeZone }: { plantId: string; upload: Upload; timeZone: string }) {
  const [asking, setAsking] = useState(false);
  const queries = useQueryClient();
  const remove = useMutation({
    mutationFn: () => sendJson('DELETE', `/uploads/${upload.id}`),
    onSuccess: async () => {
      setAsking(false);
      await queries.invalidateQueries({ queryKey: ['plant', plantId] });
    },
    onError: (error) => toast.error(error.message),
  });
  const word = upload.samplesStored > 0 ? 'undo' : 'remove';
  const period =
    upload.from !== null && upload.to !== null
      ? formatPeriod(Date.parse(upload.from), Date.parse(upload.to) + 1, timeZone)
      : null;
  return (
    <>
      <TextButton onClick={() => setAsking(true)} aria-label={`${word} ${upload.filename}`}>
        {word}
      </TextButton>
      <Dialog
        open={asking}
        onOpenChange={setAsking}
        title={word === 'undo' ? 'Take this file’s values out?' : 'Remove this file?'}
        description={
          word === 'undo' && period !== null
            ? `${upload.filename} goes, and ${period} is worked out again without it. What other files gave for these days comes back.`
            : `${upload.filename} goes. It holds no values of the record.`
        }
        footer={
          <>
            <Button onClick={() => setAsking(false)}>Keep it</Button>
            <Button variant="primary" disabled={remove.isPending} onClick={() => remove.mutate()}>
              {word === 'undo' ? 'Take out' : 'Remove'}
            </Button>
          </>
        }
      />
    </>
  );
}
