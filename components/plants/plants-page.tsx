'use client';
import { useQuery } from '@tanstack/react-query';
import { Plus } from 'lucide-react';
import Link from 'next/link';
import { useMemo, useState } from 'react';
import { DirectionMark } from '@/components/marks/direction-mark';
import { Page } from '@/components/shell/app-shell';
import { Button } from '@/components/ui/button';
import { PageHead } from '@/components/ui/page-head';
import { Segmented } from '@/components/ui/segmented';
import { EmptyState, ErrorState, LoadingWords } from '@/components/ui/states';
import { useKeys } from '@/components/ui/use-keys';
import { overviewQuery } from '@/lib/client/queries';
import { inOrder, ORDER_LABELS, ORDERS, plantsLead, type Order } from './plants-words';
import { PlantsTable } from './plants-table';

/** One row a plant, in the order in which to look at them. */
export function PlantsPage({ canAdd, organizations }: { canAdd: boolean; organizations: number }) {
  const { data, error, refetch } = useQuery(overviewQuery());
  const [order, setOrder] = useState<Order>('look');
  const plants = useMemo(() => inOrder(data?.items ?? [], order), [data, order]);
  useKeys(Object.fromEntries(ORDERS.map((each, index) => [String(index + 1), () => setOrder(each)])));
  const add = (
    <Button asChild>
      <Link href="/plants/new">
        <Plus size={16} strokeWidth={1.5} aria-hidden="true" />
        Add a plant
      </Link>
    </Button>
  );
  return (
    <Page
      foot={{
        right: `${organizations === 1 ? 'one organization' : `${organizations} organizations`} · ${plants.length} ${plants.length === 1 ? 'plant' : 'plants'}`,
      }}
    >
      <PageHead
        title="Plants"
        lead={data ? plantsLead(data.items) : 'Each plant’s week.'}
        actions={canAdd ? add : undefined}
      />
      {error && !data ? (
        <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
      ) : !data ? (
        <LoadingWords>Reading the plants’ week.</LoadingWords>
      ) : data.items.length === 0 ? (
        <EmptyState claim="No plant yet.">
          {canAdd
            ? 'Add one: its name, zone and units are enough. Then drop a week of trend data on it.'
            : 'The owner or an engineer of your organization can add one.'}
        </EmptyState>
      ) : (
        <>
          <div className="mb-5 flex flex-wrap items-center justify-between gap-4">
            <Segmented
              label="Order"
              value={order}
              onChange={setOrder}
              options={ORDERS.map((value) => ({ value, label: ORDER_LABELS[value] }))}
              className="phone:[&>span]:sr-only"
            />
            <p className="text-ink-2">seven days to yesterday, each plant’s own</p>
          </div>
          <PlantsTable plants={plants} />
          <p className="mt-4 flex flex-wrap items-center gap-x-6 gap-y-1 text-small text-ink-2">
            <span className="inline-flex items-center gap-1.5">
              <DirectionMark direction="forward" /> forward, surplus
            </span>
            <span className="inline-flex items-center gap-1.5">
              <DirectionMark direction="reverse" /> reverse, deficit
            </span>
            <span className="inline-flex items-center gap-1.5">
              <DirectionMark direction="still" /> still
            </span>
            <span className="inline-flex items-center gap-1.5">
              <DirectionMark direction="unknown" /> unknown
            </span>
            <span>Each strip is scaled to its plant’s design flow; strips compare shape, not size.</span>
          </p>
        </>
      )}
    </Page>
  );
}
