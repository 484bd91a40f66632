'use client';
import { useQuery } from '@tanstack/react-query';
import { Page } from '@/components/shell/app-shell';
import { PageHead } from '@/components/ui/page-head';
import { Section } from '@/components/ui/section';
import { EmptyState, ErrorState, LoadingWords } from '@/components/ui/states';
import { alertsQuery, plantQuery } from '@/lib/client/queries';
import { AlertRuleForm } from './alert-rule-form';
import { DeliveryTable, RunTable } from './alert-tables';
import { alertsLead } from './alert-words';
import { RunYesterday } from './run-yesterday';

/** The morning mail: its rule, who gets it, what each day came to, and who has seen it. */
export function AlertsPage({ plantId, may }: { plantId: string; may: { manage: boolean; run: boolean } }) {
  const { data: plant } = useQuery(plantQuery(plantId));
  const { data, error, refetch } = useQuery(alertsQuery(plantId));
  if (!plant) return null;
  return (
    <Page foot={{ settingsRevision: plant.settingsRevision, timeZone: plant.timeZone }}>
      <PageHead
        over={plant.name}
        title="Alerts"
        lead={data ? alertsLead(data) : 'The rule is being read.'}
        actions={may.run ? <RunYesterday plant={plant} /> : undefined}
      />
      {error && !data ? (
        <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
      ) : !data ? (
        <LoadingWords>Reading the rule and the mails.</LoadingWords>
      ) : (
        <div className="grid grid-cols-[380px_minmax(0,1fr)] gap-12 max-[1100px]:grid-cols-1 phone:block">
          <div>
            <Section title="Rule">
              <AlertRuleForm key={JSON.stringify(data.rule)} plant={plant} rule={data.rule} mayManage={may.manage} />
            </Section>
            <Section title="Goes to" sub="the operators of this organization" className="mt-7.5">
              {data.recipients.length === 0 ? (
                <EmptyState claim="Nobody.">
                  No member of this organization has the role operator, so no mail goes out.
                </EmptyState>
              ) : (
                <ul>
                  {data.recipients.map((person) => (
                    <li key={person.email} className="border-b border-grid py-1.5">
                      {person.name} <span className="text-ink-2">{person.email}</span>
                    </li>
                  ))}
                </ul>
              )}
            </Section>
          </div>
          <div className="min-w-0 phone:mt-7.5">
            <Section title="Mails" sub="newest first">
              <DeliveryTable deliveries={data.deliveries} timeZone={plant.timeZone} />
            </Section>
            <Section title="Days" sub="what each came to" className="mt-7.5">
              <RunTable runs={data.runs} timeZone={plant.timeZone} />
            </Section>
          </div>
        </div>
      )}
    </Page>
  );
}
