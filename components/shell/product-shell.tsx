'use client';
import { useQueryClient } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import type { ReactNode } from 'react';
import { toast } from 'sonner';
import { ApiError, sendJson } from '@/lib/client/api';
import { AppShell } from './app-shell';
import type { ShellPlant } from './plant-switcher';

export interface ProductShellProps {
  person: { name: string; email: string };
  plants: readonly ShellPlant[];
  plantId?: string;
  children: ReactNode;
}

/** The shell with a way out: signing out clears what this tab has read. */
export function ProductShell(props: ProductShellProps) {
  const router = useRouter();
  const queries = useQueryClient();
  const signOut = async () => {
    try {
      await sendJson('DELETE', '/session');
    } catch (error) {
      toast.error(error instanceof ApiError ? error.message : 'Signing out did not work. Try again.');
      return;
    }
    queries.clear();
    router.replace('/sign-in');
    router.refresh();
  };
  return <AppShell {...props} onSignOut={() => void signOut()} />;
}
