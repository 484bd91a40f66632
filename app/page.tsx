import { redirect } from 'next/navigation';
import { PLANTS_PATH } from '@/components/shell/tabs';
import { currentAccess } from '@/lib/auth/current';

/** The address without a path: to the plants, or to the way in. */
export default async function Home(): Promise<never> {
  redirect((await currentAccess()) ? PLANTS_PATH : '/sign-in');
}
