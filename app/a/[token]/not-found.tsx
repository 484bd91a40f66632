import Link from 'next/link';
import { LinkFrame } from '../link-frame';

/** A link that opens nothing: changed on its way, too old, or of someone who has left. */
export default function LinkNotFound() {
  return (
    <LinkFrame title="This link opens nothing">
      <p>
        It was not copied whole, it is more than 30 days old, or the person it was mailed to has left the organization.
        Nothing was changed. Open the mail again, or{' '}
        <Link href="/plants" className="link">
          sign in
        </Link>{' '}
        and acknowledge there.
      </p>
    </LinkFrame>
  );
}
