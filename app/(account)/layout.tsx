import type { ReactNode } from 'react';
import { AccountTide } from '@/components/account/account-tide';

/** The pages before anyone is signed in: word and form at the left, fourteen invented days of tide at the right. */
export default function AccountLayout({ children }: { children: ReactNode }) {
  return (
    <main className="page grid min-h-dvh grid-cols-[340px_minmax(0,1fr)] gap-[180px] py-16 max-[1200px]:gap-16 phone:block phone:py-6">
      <div className="flex flex-col justify-between gap-10">
        <div>
          <p className="font-serif text-[2.75rem] leading-[1.1] font-semibold phone:text-[2rem]">Slackwater</p>
          <p className="mt-3.5 mb-10 font-serif text-lead phone:mb-6">
            Slack water is the turn of the tide, when nothing flows either way. A decoupler at slack is a plant in
            balance.
          </p>
          {children}
        </div>
        <p className="text-small text-ink-2 phone:hidden">Slackwater reads trends; it writes to no control system.</p>
      </div>
      <AccountTide />
    </main>
  );
}
