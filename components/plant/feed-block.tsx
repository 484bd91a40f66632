import Link from 'next/link';
import { plantPath } from '@/components/shell/tabs';

/** How new days get here: by hand, or by the export that the building system writes every night. */
export function FeedBlock({ plantId }: { plantId: string }) {
  return (
    <p className="mt-7.5 max-w-[92ch] text-small text-ink-2">
      New days come from the plant’s trend exports.{' '}
      <Link href={`${plantPath(plantId, 'uploads')}#feed`} className="link">
        Set up a nightly feed
      </Link>
      : one line that sends the export by itself, with a token that may do nothing else.
    </p>
  );
}
