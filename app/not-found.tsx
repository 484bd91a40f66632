import type { Metadata } from 'next';
import Link from 'next/link';
import { PLANTS_PATH } from '@/components/shell/tabs';

export const metadata: Metadata = { title: 'Not found' };

export default function NotFound() {
  return (
    <main className="page py-16">
      <h1 className="mb-2 font-serif text-title font-medium">Nothing is here</h1>
      <p className="mb-6 max-w-[60ch] font-serif text-lead">
        The page does not exist, or it belongs to an organization that you are not a member of.
      </p>
      <Link href={PLANTS_PATH} className="link">
        All plants
      </Link>
    </main>
  );
}
