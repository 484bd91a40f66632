'use client';
import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { Controller, useForm } from 'react-hook-form';
import type { z } from 'zod';
import { Button } from '@/components/ui/button';
import { Checkbox, Field, Input } from '@/components/ui/field';
import { Notice } from '@/components/ui/states';
import { sendJson } from '@/lib/client/api';
import { alertsQuery } from '@/lib/client/queries';
import { AlertRule } from '@/lib/schemas/alert';
import type { Plant } from '@/lib/schemas/plant';

/** When the mail goes out and over what; absent controls for a role that may only see it. */
export function AlertRuleForm({ plant, rule, mayManage }: { plant: Plant; rule: AlertRule; mayManage: boolean }) {
  const queries = useQueryClient();
  const { register, control, handleSubmit, formState } = useForm<z.input<typeof AlertRule>, unknown, AlertRule>({
    resolver: zodResolver(AlertRule),
    defaultValues: rule,
  });
  const save = useMutation({
    mutationFn: (next: AlertRule) => sendJson('PUT', `/plants/${plant.id}/alert-rule`, next),
    onSuccess: () => queries.invalidateQueries({ queryKey: alertsQuery(plant.id).queryKey }),
  });
  const { errors, isDirty } = formState;
  return (
    <form
      onSubmit={(event) => void handleSubmit((next) => save.mutate(next))(event)}
      noValidate
      aria-label="Alert rule"
      className="grid gap-3.5"
    >
      <fieldset disabled={!mayManage} className="grid gap-3.5">
        <Controller
          control={control}
          name="enabled"
          render={({ field }) => (
            <Checkbox checked={field.value ?? true} onChange={field.onChange} disabled={!mayManage}>
              Send the daily mail
            </Checkbox>
          )}
        />
        <Field label="Reverse flow of at least" unit="minutes in the day" error={errors.minReverseMinutes?.message}>
          {(ids) => (
            <Input
              {...ids}
              {...register('minReverseMinutes', { valueAsNumber: true })}
              type="number"
              min={1}
              max={1440}
              inputMode="numeric"
            />
          )}
        </Field>
        <Field label="and the largest of it at least" unit="gpm" error={errors.minReverseFlowGpm?.message}>
          {(ids) => (
            <Input
              {...ids}
              {...register('minReverseFlowGpm', { valueAsNumber: true })}
              type="number"
              min={0}
              inputMode="numeric"
            />
          )}
        </Field>
        <Field label="Send at" unit={plant.timeZone} error={errors.sendAt?.message}>
          {(ids) => <Input {...ids} {...register('sendAt')} type="time" />}
        </Field>
      </fieldset>
      {save.error ? <Notice live>{save.error.message}</Notice> : null}
      {mayManage ? (
        <div>
          <Button type="submit" disabled={!isDirty || save.isPending}>
            {save.isPending ? 'Saving' : 'Save the rule'}
          </Button>
        </div>
      ) : (
        <p className="text-ink-2">The owner or an engineer of this organization can change the rule.</p>
      )}
    </form>
  );
}
