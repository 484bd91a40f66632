'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { toast } from 'sonner';
import { Button } from '@/components/ui/button';
import { sendJson } from '@/lib/client/api';
import { addLocalDays, localDay } from '@/lib/client/format-time';
import { alertsQuery } from '@/lib/client/queries';
import type { Plant } from '@/lib/schemas/plant';

/** Evaluates the plant's yesterday now, as the schedule would; a day that was mailed is not mailed again. */
export function RunYesterday({ plant }: { plant: Plant }) {
  const queries = useQueryClient();
  const run = useMutation({
    mutationFn: () =>
      sendJson('POST', `/plants/${plant.id}/alerts/runs`, {
        day: addLocalDays(localDay(Date.now(), plant.timeZone), -1),
      }),
    onSuccess: () => queries.invalidateQueries({ queryKey: alertsQuery(plant.id).queryKey }),
    onError: (error) => toast.error(error.message),
  });
  return (
    <Button variant="primary" onClick={() => run.mutate()} disabled={run.isPending}>
      Evaluate yesterday now
    </Button>
  );
}
