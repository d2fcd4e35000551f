import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { EndSessions } from '@/components/account/end-sessions';
import { NoticesForm } from '@/components/account/notices-form';
import { ReviewKeysForm } from '@/components/account/review-keys-form';
import { SessionTable } from '@/components/account/session-table';
import { PasswordForm } from '@/components/account/password-form';
import { PathThread } from '@/components/ui/path-thread';
import { Facts, PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { reviewKeysOf } from '@/lib/review/review-keys';
import { ROLE_NAMES } from '@/lib/access';
import { storedReviewKeys } from '@/models/queries/review-keys';
import { noticesOff } from '@/models/queries/notices';
import { pathLevels } from '../path-levels';
import { changeOwnPassword, endOwnSessions, saveNotices, saveReviewKeys } from './actions';

export const metadata: Metadata = { title: 'Account' };

export default async function AccountPage() {
  const viewer = await requireViewer('own-account', '/account');
  const off = await noticesOff(viewer.labId, viewer.userId);
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Sheet>
        <PageTitle>{viewer.name}</PageTitle>
        <Section title="You">
          <Facts
            items={[
              { name: 'E-mail', value: viewer.email },
              ...viewer.labs.map(({ name, roles }) => ({
                name: 'Laboratory',
                value: `${name}: ${roles.map((role) => ROLE_NAMES[role].toLowerCase()).join(', ')}`,
              })),
            ]}
          />
        </Section>
        <Section title="Mail" count={`from ${viewer.lab.name}`}>
          <NoticesForm off={off} save={saveNotices} />
        </Section>
        {may(viewer, 'review') ? (
          <Section id="review-keys" title="Keys of the review desk" count="one letter or digit each">
            <ReviewKeysForm
              keys={reviewKeysOf(await storedReviewKeys(viewer.labId, viewer.userId))}
              save={saveReviewKeys}
            />
          </Section>
        ) : null}
        <Section title="Password" count="changing it ends your other sessions">
          <PasswordForm change={changeOwnPassword} />
        </Section>
        <Section title="Sessions" count="on this and other devices">
          <SessionTable source="/api/v1/sessions" />
          <EndSessions end={endOwnSessions} />
        </Section>
      </Sheet>
    </>
  );
}
