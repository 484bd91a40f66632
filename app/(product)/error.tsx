'use client';
import { ErrorState } from '@/components/ui/states';

/** A page that could not be made: what is safe, what to do, and the reference that finds it in the log. */
export default function ProductError({ error, reset }: { error: Error & { digest?: string }; reset: () => void }) {
  return (
    <main className="page py-16">
      <h1 className="mb-2 font-serif text-title font-medium">This page could not be made</h1>
      <ErrorState tag="error" onRetry={reset} reference={error.digest}>
        Nothing that was stored is lost. Try again; if it stays, tell the person who runs this service.
      </ErrorState>
    </main>
  );
}
