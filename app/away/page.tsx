import type { Metadata } from 'next';
import { PlainPage } from '@/components/shell/plain-page';
import { UntilBack } from '@/components/shell/until-back';
import { safeDestination } from '@/components/sign-in/destination';
import { ButtonLink } from '@/components/ui/button';

export const metadata: Metadata = { title: 'In a moment' };

/** Where pages lead while the database is away: at a start, after a crash, during maintenance. */
export default async function AwayPage({
  searchParams,
}: {
  searchParams: Promise<{ next?: string | string[] }>;
}) {
  const destination = safeDestination((await searchParams).next);
  return (
    <PlainPage title="The database does not answer">
      <p role="alert">
        It is starting, or being looked after. Nothing that was stored is lost, and work goes on where it was.
        Your page opens by itself as soon as the database answers.
      </p>
      <UntilBack destination={destination} />
      <ButtonLink href={destination} kind="main">
        Try now
      </ButtonLink>
    </PlainPage>
  );
}
