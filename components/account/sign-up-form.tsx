'use client';
import { zodResolver } from '@hookform/resolvers/zod';
import Link from 'next/link';
import { useForm } from 'react-hook-form';
import type { z } from 'zod';
import { PLANTS_PATH } from '@/components/shell/tabs';
import { Button } from '@/components/ui/button';
import { Field, Input } from '@/components/ui/field';
import { Notice } from '@/components/ui/states';
import { ApiError, sendJson } from '@/lib/client/api';
import { CreateAccount } from '@/lib/schemas/session';
import { useEnter, WAIT_WORDS } from './use-enter';

type Account = z.output<typeof CreateAccount>;
const FIELDS: readonly (keyof Account)[] = ['organizationName', 'name', 'email', 'password'];

/** A new organization with this person as its owner. */
export function SignUpForm() {
  const enter = useEnter();
  const { register, handleSubmit, formState, setError } = useForm<z.input<typeof CreateAccount>, unknown, Account>({
    resolver: zodResolver(CreateAccount),
    defaultValues: { organizationName: '', name: '', email: '', password: '' },
  });
  const { errors, isSubmitting } = formState;
  const submit = handleSubmit(async (values) => {
    try {
      await sendJson('POST', '/accounts', values);
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      const placed = error.errors.flatMap(({ path, message }) => {
        const field = FIELDS.find((name) => name === path);
        if (field) setError(field, { message });
        return field ?? [];
      });
      if (placed.length === 0) setError('root', { message: error.message });
      return;
    }
    enter(PLANTS_PATH);
  });
  return (
    <form
      method="post"
      onSubmit={(event) => void submit(event)}
      noValidate
      aria-label="Start an organization"
      className="border-t border-ink pt-4.5"
    >
      <h1 className="mb-4 text-[15px] font-semibold">Start an organization</h1>
      <div className="grid gap-3.5">
        <Field label="Organization" error={errors.organizationName?.message}>
          {(ids) => <Input {...ids} {...register('organizationName')} autoComplete="organization" autoFocus />}
        </Field>
        <Field label="Your name" error={errors.name?.message}>
          {(ids) => <Input {...ids} {...register('name')} autoComplete="name" />}
        </Field>
        <Field label="E-mail" error={errors.email?.message}>
          {(ids) => <Input {...ids} {...register('email')} type="email" autoComplete="username" inputMode="email" />}
        </Field>
        <Field
          label="Password"
          error={errors.password?.message}
          hint="At least 12 characters; a few words are easiest to keep."
        >
          {(ids) => <Input {...ids} {...register('password')} type="password" autoComplete="new-password" />}
        </Field>
        {errors.root?.message === undefined ? null : <Notice live>{errors.root.message}</Notice>}
        <Button type="submit" variant="primary" disabled={isSubmitting} className="min-h-9 w-full phone:min-h-11">
          {isSubmitting ? WAIT_WORDS.signUp : 'Start'}
        </Button>
      </div>
      <p className="mt-5 text-ink-2">
        Have an account?{' '}
        <Link href="/sign-in" className="link">
          Sign in
        </Link>
      </p>
    </form>
  );
}
