'use client';
import './globals.css';

/** When not even the frame of the page could be made. */
export default function GlobalError({ error, reset }: { error: Error & { digest?: string }; reset: () => void }) {
  return (
    <html lang="en">
      <body>
        <main className="page py-16">
          <h1 className="mb-2 font-serif text-title font-medium">Slackwater could not answer</h1>
          <p className="mb-6 max-w-[60ch]">
            Nothing that was stored is lost. If it stays, tell the person who runs this service
            {error.digest === undefined ? '.' : `; reference ${error.digest}.`}
          </p>
          <button type="button" className="link" onClick={reset}>
            Try again
          </button>
        </main>
      </body>
    </html>
  );
}
