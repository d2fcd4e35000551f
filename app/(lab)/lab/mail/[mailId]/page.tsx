import type { Metadata } from 'next';
import Link from 'next/link';
import { requireViewer } from '@/auth/page';
import { readMail } from '@/app/api/operations/read-mail';
import { mailState } from '@/components/lab/mail-words';
import { MarginNote } from '@/components/ui/margin-note';
import { Moment } from '@/components/ui/moment';
import { Facts } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { LINK_KINDS, MAIL_KIND_WORDS } from '@/lib/mail/mail-kinds';
import type { MailView } from '@/lib/views/mail-view';
import { found } from '../../../found';
import { LabFrame } from '../../lab-frame';

export const metadata: Metadata = { title: 'Mail', referrer: 'no-referrer' };

export default async function OneMailPage({ params }: { params: Promise<{ mailId: string }> }) {
  const { mailId } = await params;
  const viewer = await requireViewer('see-mail', `/lab/mail/${mailId}`);
  const mail = await found(mailId, (id) => readMail(viewer, id));
  const { bead, words } = mailState(mail);
  const opens = LINK_KINDS.includes(mail.kind) && mail.text !== null;
  const margin = opens ? (
    <MarginNote tone="caution" title="This link opens an account">
      Hand it to {mail.person.name} and nobody else. That you have read it stands in the audit trail.
    </MarginNote>
  ) : null;
  return (
    <LabFrame viewer={viewer} tab="mail" margin={margin}>
      <p className="pb-2 text-note">
        <Link href="/lab/mail">All mail</Link>
      </p>
      <h2 className="font-serif text-head2 font-strong [overflow-wrap:anywhere]">
        {mail.subject ?? MAIL_KIND_WORDS[mail.kind]}
      </h2>
      <Facts
        items={[
          { name: 'To', value: `${mail.person.name}, ${mail.recipient ?? mail.person.email}` },
          { name: 'Asked for', value: <Moment at={mail.createdAt} /> },
          { name: 'State', value: <StateWord state={bead}>{words}</StateWord> },
          ...(mail.trouble ? [{ name: 'Trouble', value: mail.trouble.detail }] : []),
        ]}
      />
      <Words mail={mail} />
    </LabFrame>
  );
}

function Words({ mail }: { mail: MailView }) {
  if (mail.text !== null) {
    return (
      <div
        role="document"
        aria-label="Words of the mail"
        className="mt-4 max-w-[84ch] whitespace-pre-wrap bg-sunk p-4 [overflow-wrap:anywhere]"
      >
        {mail.text}
      </div>
    );
  }
  const why = {
    kept: 'Its person belongs to another laboratory too: the link in it is not for this one to see.',
    sent: 'It has left; its words are kept nowhere here.',
    waiting: 'Its words are made when it leaves.',
    dropped: 'Nobody needs it any more, so it was never written.',
    failed: 'It could not be delivered, so nothing of it is kept. Its work in the queue can be run again.',
  }[mail.state];
  return <p className="pt-4 text-note text-ink-2">{why}</p>;
}
