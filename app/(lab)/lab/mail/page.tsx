import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { MailTable } from '@/components/lab/mail-table';
import { MarginNote } from '@/components/ui/margin-note';
import { SettingError } from '@/lib/env';
import { mailSettings } from '@/lib/mail-settings';
import { LabFrame } from '../lab-frame';

export const metadata: Metadata = { title: 'Mail' };

export default async function MailPage() {
  const viewer = await requireViewer('see-mail', '/lab/mail');
  return (
    <LabFrame viewer={viewer} tab="mail" margin={<WhereMailGoes />}>
      <Suspense>
        <MailTable />
      </Suspense>
    </LabFrame>
  );
}

function WhereMailGoes() {
  const settings = settingsOrProblem();
  if (settings instanceof SettingError) {
    return (
      <MarginNote tone="caution" title="The mail settings can’t be used">
        {settings.message} Until then mail waits; it is tried for a day.
      </MarginNote>
    );
  }
  return settings.smtpUrl ? (
    <MarginNote title="Mail server">
      Mail leaves by {new URL(settings.smtpUrl).host} from {settings.from.address}. What can&rsquo;t leave at
      once is tried again for 24 hours. Words are not kept here.
    </MarginNote>
  ) : (
    <MarginNote tone="warning" title="No mail server">
      Mail is kept here and goes nowhere: read it and hand on what it says. For mail that leaves, whoever runs
      Beadline sets <code>BEADLINE_SMTP_URL</code> and <code>BEADLINE_MAIL_FROM</code>.
    </MarginNote>
  );
}

function settingsOrProblem() {
  try {
    return mailSettings();
  } catch (thrown) {
    if (thrown instanceof SettingError) return thrown;
    throw thrown;
  }
}
