'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Controller, useForm, useWatch } from 'react-hook-form';
import { useUnits } from '@/components/shell/units-context';
import { Button } from '@/components/ui/button';
import { Field, Input, TextArea } from '@/components/ui/field';
import { Select } from '@/components/ui/select';
import { Notice } from '@/components/ui/states';
import { ApiError, sendJson } from '@/lib/client/api';
import { unitLabel } from '@/lib/client/format';
import { sensorName } from '@/lib/client/sensor-words';
import type { SensorRole } from '@/lib/hydronics/calibration-types';
import { SpotCheckMade, type CreateSpotCheck } from '@/lib/schemas/sensors';
import { emptyForm, fieldOf, isFlow, spotCheckBody, usualSigma, type SpotCheckForm } from './spot-check-values';

export interface SpotCheckFormProps {
  plantId: string;
  timeZone: string;
  roles: readonly SensorRole[];
  /** The analysis that the check began. */
  onMade: (analysisId: string | null) => void;
}

/** A reading of a reference instrument beside one of the plant's sensors. */
export function SpotCheckFormFields({ plantId, timeZone, roles, onMade }: SpotCheckFormProps) {
  const queries = useQueryClient();
  const { units } = useUnits();
  const [openedMs] = useState(() => Date.now());
  const start = (role: SensorRole) => emptyForm(role, openedMs, timeZone, units);
  const { register, control, handleSubmit, setValue, setError, reset, formState } = useForm<SpotCheckForm>({
    defaultValues: start(roles[0] ?? 'primarySupplyTemp'),
  });
  const role = useWatch({ control, name: 'role' });
  const flow = isFlow(role);
  const unit = unitLabel(flow ? 'flow' : 'temperature', units);
  const save = useMutation({
    mutationFn: async (body: CreateSpotCheck) =>
      SpotCheckMade.parse(await sendJson('POST', `/plants/${plantId}/spot-checks`, body)),
    onSuccess: async (made) => {
      reset(start(made.role));
      onMade(made.analysisId);
      await queries.invalidateQueries({ queryKey: ['plant', plantId, 'spot-checks'] });
    },
    onError: (error) => {
      if (error instanceof ApiError) for (const { path, message } of error.errors) setError(fieldOf(path), { message });
    },
  });
  const submit = (form: SpotCheckForm) => {
    const made = spotCheckBody(form, timeZone, units);
    if ('body' in made) save.mutate(made.body);
    else
      for (const [name, message] of Object.entries(made.errors))
        setError(name as keyof SpotCheckForm, { message }, { shouldFocus: true });
  };
  const { errors } = formState;
  return (
    <form
      onSubmit={(event) => void handleSubmit(submit)(event)}
      noValidate
      aria-label="Enter a spot check"
      className="grid grid-cols-2 gap-3.5 phone:grid-cols-1"
    >
      <Field label="What was read" error={errors.role?.message}>
        {({ id, ...described }) => (
          <Controller
            control={control}
            name="role"
            render={({ field }) => (
              <Select<SensorRole>
                id={id}
                value={field.value}
                onChange={(next) => {
                  // The usual uncertainty is of another kind for a flow than for a temperature.
                  if (isFlow(next) !== isFlow(field.value)) setValue('sigma', usualSigma(next, units));
                  field.onChange(next);
                }}
                className="min-h-9 phone:min-h-11"
                options={roles.map((value) => ({ value, label: sensorName(value) }))}
                {...described}
              />
            )}
          />
        )}
      </Field>
      <Field label="When" unit={timeZone} error={errors.at?.message}>
        {(ids) => <Input {...ids} {...register('at')} type="datetime-local" />}
      </Field>
      <Field
        label="The reference showed"
        unit={role === 'bypassFlow' ? `${unit}, forward positive` : unit}
        error={errors.reading?.message}
      >
        {(ids) => <Input {...ids} {...register('reading')} inputMode="decimal" autoComplete="off" />}
      </Field>
      <Field
        label="The plant’s own showed"
        unit={unit}
        error={errors.shown?.message}
        hint="Left empty, the record is asked."
      >
        {(ids) => <Input {...ids} {...register('shown')} inputMode="decimal" autoComplete="off" />}
      </Field>
      <Field
        label="Its standard uncertainty"
        unit={flow ? '% of reading' : unitLabel('temperatureDifference', units)}
        error={errors.sigma?.message}
      >
        {(ids) => <Input {...ids} {...register('sigma')} inputMode="decimal" autoComplete="off" />}
      </Field>
      <Field label="Instrument" error={errors.instrument?.message}>
        {(ids) => <Input {...ids} {...register('instrument')} autoComplete="off" />}
      </Field>
      <Field label="Note" error={errors.note?.message} className="col-span-full">
        {(ids) => <TextArea {...ids} {...register('note')} rows={2} />}
      </Field>
      {save.error ? (
        <div className="col-span-full">
          <Notice live>{save.error.message}</Notice>
        </div>
      ) : null}
      <div className="col-span-full">
        <Button type="submit" disabled={save.isPending} className="phone:w-full">
          {save.isPending ? 'Keeping it' : 'Enter the reading'}
        </Button>
      </div>
    </form>
  );
}
