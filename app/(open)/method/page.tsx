import type { Metadata } from 'next';
import { MethodPage } from '@/components/method/method-page';

export const metadata: Metadata = {
  title: 'How it is worked out',
  description:
    'How direction, bypass flow and blended supply of a chilled-water decoupler are estimated from trends, how sure the answer is, how well it does, and from which sources.',
};

/** Open to everyone: whoever is sent a number may read how it was made. */
export default function MethodRoute() {
  return <MethodPage />;
}
