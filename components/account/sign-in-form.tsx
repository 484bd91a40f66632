'use client';
import { zodResolver } from '@hookform/resolvers/zod';
import Link from 'next/link';
import { useForm } from 'react-hook-form';
import type { z } from 'zod';
import { Button } from '@/components/ui/button';
import { Field, Input } from '@/components/ui/field';
import { Notice } from '@/components/ui/states';
import { ApiError, sendJson } from '@/lib/client/api';
import { SignIn } from '@/lib/schemas/session';
import { WAIT_WORDS, useEnter } from './use-enter';

/** Address and password; says how many tries are left and nothing about whether the address exists. */
export function SignInForm({ next, signUp }: { next: string; signUp: boolean }) {
  const enter = useEnter();
  const { register, handleSubmit, formState, setError } = useForm<
    z.input<typeof SignIn>,
    unknown,
    z.output<typeof SignIn>
  >({
    resolver: zodResolver(SignIn),
    defaultValues: { email: '', password: '' },
  });
  const { errors, isSubmitting } = formState;
  const submit = handleSubmit(async (values) => {
    try {
      await sendJson('POST', '/session', values);
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      setError('root', { message: error.message });
      return;
    }
    enter(next);
  });
  return (
    <form
      method="post"
      onSubmit={(event) => void submit(event)}
      noValidate
      aria-label="Sign in"
      className="border-t border-ink pt-4.5"
    >
      <h1 className="mb-4 text-[15px] font-semibold">Sign in</h1>
      <div className="grid gap-3.5">
        <Field label="E-mail" error={errors.email?.message}>
          {(ids) => (
            <Input {...ids} {...register('email')} type="email" autoComplete="username" autoFocus inputMode="email" />
          )}
        </Field>
        <Field label="Password" error={errors.password?.message}>
          {(ids) => <Input {...ids} {...register('password')} type="password" autoComplete="current-password" />}
        </Field>
        {errors.root?.message === undefined ? null : <Notice live>{errors.root.message}</Notice>}
        <Button type="submit" variant="primary" disabled={isSubmitting} className="min-h-9 w-full phone:min-h-11">
          {isSubmitting ? WAIT_WORDS.signIn : 'Sign in'}
        </Button>
      </div>
      {signUp ? (
        <p className="mt-5 text-ink-2">
          No account yet?{' '}
          <Link href="/sign-up" className="link">
            Start an organization
          </Link>
        </p>
      ) : null}
    </form>
  );
}
