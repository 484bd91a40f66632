import type { Metadata } from 'next';
import { FormatsPage } from '@/components/formats/formats-page';

export const metadata: Metadata = {
  title: 'What files are read',
  description:
    'The trend exports that are read as they are: tables and files, text and packing, times, values and units, each with an example and what it is read as.',
};

/** Open to everyone: whoever has an export may see whether it is read before signing up. */
export default function FormatsRoute() {
  return <FormatsPage />;
}
