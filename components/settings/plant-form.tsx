'use client';
import { zodResolver } from '@hookform/resolvers/zod';
import { Plus, X } from 'lucide-react';
import type { ReactNode } from 'react';
import { Controller, useFieldArray, useForm, type FieldPath } from 'react-hook-form';
import { Button, TextButton } from '@/components/ui/button';
import { Field, Input } from '@/components/ui/field';
import { Section } from '@/components/ui/section';
import { Select } from '@/components/ui/select';
import { Notice } from '@/components/ui/states';
import { ApiError } from '@/lib/client/api';
import { ARRANGEMENTS } from '@/lib/schemas/plant';
import { EMPTY_UNIT, PlantForm, STEP_OPTIONS, type PlantFormInput, type PlantFormOutput } from './plant-form-values';

const ARRANGEMENT_WORDS: Readonly<Record<(typeof ARRANGEMENTS)[number], string>> = {
  'primary-secondary': 'primary-secondary, with a decoupler',
  'variable-primary': 'variable primary, with a minimum-flow bypass',
  'building-bridge': 'building bridge, blending by design',
};
const UNIT_FIELDS = [
  ['tons', 'rated', 'tons'],
  ['flowGpm', 'design flow', 'gpm'],
  ['deltaTF', 'or delta-T', '°F'],
  ['minFlowGpm', 'least flow', 'gpm'],
  ['maxFlowGpm', 'most flow', 'gpm'],
  ['kwPerTon', 'full load', 'kW/ton'],
  ['auxiliaryKw', 'auxiliaries', 'kW'],
] as const;

export interface PlantFormProps {
  start: PlantFormInput;
  organizations?: readonly { id: string; name: string }[];
  /** What a number stands at while its field is empty. */
  assumed?: (path: FieldPath<PlantFormInput>) => string | undefined;
  stepLocked?: boolean;
  readOnly?: boolean;
  submitWord: string;
  onSave: (form: PlantFormOutput) => Promise<void>;
}

/** A plant's name, zone, arrangement and design numbers. What is left empty stays the product's assumption, and says so. */
export function PlantFormFields({
  start,
  organizations = [],
  assumed,
  stepLocked = false,
  readOnly = false,
  submitWord,
  onSave,
}: PlantFormProps) {
  const { register, control, handleSubmit, formState, setError } = useForm<PlantFormInput, unknown, PlantFormOutput>({
    resolver: zodResolver(PlantForm),
    defaultValues: start,
  });
  const units = useFieldArray({ control, name: 'units' });
  const { errors, isSubmitting } = formState;
  const submit = handleSubmit(async (form) => {
    try {
      await onSave(form);
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      setError('root', { message: error.errors[0]?.message ?? error.message });
    }
  });
  const number = (name: FieldPath<PlantFormInput>, label: ReactNode, unit: string, error: string | undefined) => (
    <Field label={label} unit={unit} error={error}>
      {(ids) => <Input {...ids} {...register(name)} inputMode="decimal" placeholder={assumed?.(name)} />}
    </Field>
  );
  return (
    <form onSubmit={(event) => void submit(event)} noValidate aria-label="Plant" className="grid max-w-[960px] gap-7.5">
      <fieldset disabled={readOnly} className="grid gap-7.5">
        <Section title="The plant">
          <div className="grid grid-cols-3 gap-4 phone:grid-cols-1">
            {organizations.length > 1 ? (
              <Field label="Organization" error={errors.organizationId?.message}>
                {(ids) => (
                  <Controller
                    control={control}
                    name="organizationId"
                    render={({ field }) => (
                      <Select
                        {...ids}
                        value={field.value === '' ? null : field.value}
                        onChange={field.onChange}
                        options={organizations.map(({ id, name }) => ({ value: id, label: name }))}
                      />
                    )}
                  />
                )}
              </Field>
            ) : null}
            <Field label="Name" error={errors.name?.message}>
              {(ids) => <Input {...ids} {...register('name')} />}
            </Field>
            <Field label="Time zone" error={errors.timeZone?.message} hint="of the plant, such as America/Denver">
              {(ids) => <Input {...ids} {...register('timeZone')} list="time-zones" />}
            </Field>
            <Field label="Arrangement" error={errors.arrangement?.message}>
              {(ids) => (
                <Controller
                  control={control}
                  name="arrangement"
                  render={({ field }) => (
                    <Select
                      {...ids}
                      value={field.value}
                      onChange={field.onChange}
                      disabled={readOnly}
                      options={ARRANGEMENTS.map((value) => ({ value, label: ARRANGEMENT_WORDS[value] }))}
                    />
                  )}
                />
              )}
            </Field>
            <Field
              label="Step of the record"
              error={errors.stepMinutes?.message}
              hint={stepLocked ? 'stands while the plant holds data' : 'files of another step are brought to it'}
            >
              {(ids) => (
                <Controller
                  control={control}
                  name="stepMinutes"
                  render={({ field }) => (
                    <Select
                      {...ids}
                      value={field.value}
                      onChange={field.onChange}
                      disabled={readOnly || stepLocked}
                      options={STEP_OPTIONS}
                    />
                  )}
                />
              )}
            </Field>
          </div>
          <datalist id="time-zones">
            {Intl.supportedValuesOf('timeZone').map((zone) => (
              <option key={zone} value={zone} />
            ))}
          </datalist>
        </Section>
        <Section title="Design" sub="empty numbers are assumed, and marked so">
          <div className="grid grid-cols-3 gap-4 phone:grid-cols-1">
            {number('productionSupplyF', 'Production supply set-point', '°F', errors.productionSupplyF?.message)}
            {number('loadDeltaTF', 'Load delta-T (coils)', '°F', errors.loadDeltaTF?.message)}
            {number('loadTons', 'Design load', 'tons', errors.loadTons?.message)}
            {number('pumpFlowGpm', 'Distribution pumps', 'gpm', errors.pumpFlowGpm?.message)}
            {number('pumpHeadFt', 'Their head', 'ft', errors.pumpHeadFt?.message)}
            {number('blendedSupplyF', 'Blend of a building bridge', '°F', errors.blendedSupplyF?.message)}
          </div>
        </Section>
        <Section title="Production units">
          <ol className="grid gap-4">
            {units.fields.map((row, index) => (
              <li
                key={row.id}
                className="grid grid-cols-[110px_repeat(7,minmax(0,1fr))_auto] items-start gap-2.5 border-b border-grid pb-4 phone:grid-cols-2"
              >
                <Field label="name" error={errors.units?.[index]?.name?.message}>
                  {(ids) => <Input {...ids} {...register(`units.${index}.name`)} />}
                </Field>
                {UNIT_FIELDS.map(([key, label, unit]) => (
                  <div key={key}>
                    {number(`units.${index}.${key}`, label, unit, errors.units?.[index]?.[key]?.message)}
                  </div>
                ))}
                <button
                  type="button"
                  aria-label={`Take unit ${index + 1} out`}
                  className="mt-6 flex size-9 items-center justify-center rounded hover:bg-tint disabled:invisible phone:mt-0 phone:size-11"
                  disabled={readOnly || units.fields.length === 1}
                  onClick={() => units.remove(index)}
                >
                  <X size={16} strokeWidth={1.5} aria-hidden="true" />
                </button>
              </li>
            ))}
          </ol>
          {readOnly ? null : (
            <p className="mt-3">
              <TextButton onClick={() => units.append({ ...EMPTY_UNIT, name: `CH-${units.fields.length + 1}` })}>
                <span className="inline-flex items-center gap-1.5">
                  <Plus size={16} strokeWidth={1.5} aria-hidden="true" />
                  another unit
                </span>
              </TextButton>
            </p>
          )}
        </Section>
        <Section title="Tariff" sub="without one, energy only">
          <div className="grid grid-cols-3 gap-4 phone:grid-cols-1">
            {number('energyPerKwh', 'Energy', 'a kWh', errors.energyPerKwh?.message)}
            {number('currency', 'Currency', 'three letters', errors.currency?.message)}
          </div>
        </Section>
      </fieldset>
      {errors.root?.message === undefined ? null : <Notice live>{errors.root.message}</Notice>}
      {Object.keys(errors).some((key) => key !== 'root') ? (
        <Notice live>Some fields need attention; each says what.</Notice>
      ) : null}
      {readOnly ? (
        <p className="text-ink-2">The owner or an engineer of this organization can change these.</p>
      ) : (
        <div>
          <Button type="submit" variant="primary" disabled={isSubmitting}>
            {isSubmitting ? 'Saving' : submitWord}
          </Button>
        </div>
      )}
    </form>
  );
}
