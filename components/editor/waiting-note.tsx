'use client';

import { Button } from '@/components/ui/button';
import { StaleLine } from '@/components/ui/page-states';
import { StateBead } from '@/components/ui/state-bead';
import { formatCount } from '@/lib/format/count';
import type { EditSession } from './edit-session';
import { useEdit } from './use-edit';

const countOfCorrections = (n: number) => (n === 1 ? 'one correction' : `${formatCount(n)} corrections`);

/** Whether what was done is stored, calmly: what waits, what could not be stored, and what to do. */
export function WaitingNote({ session }: { session: EditSession }) {
  const { state } = session;
  const link = useEdit(state, (s) => s.link);
  const waiting = useEdit(state, (s) => s.waiting);
  const keeps = useEdit(state, (s) => s.keeps);
  const revision = useEdit(state, (s) => s.revision);
  const aside = useEdit(state, (s) => s.aside);
  const news = useEdit(state, (s) => s.news);
  return (
    <div className="pb-3 text-note" data-link={link.kind} data-waiting={waiting}>
      <p role="status" className="flex items-start gap-[7px]">
        <StateBead
          state={link.kind === 'lost' || link.kind === 'held' ? 'stale' : waiting > 0 ? 'running' : 'done'}
          className="mt-1"
        />
        <span>
          {link.kind === 'lost'
            ? `No link to the server. ${upper(countOfCorrections(waiting))} ${waiting === 1 ? 'is' : 'are'} kept here and will be sent later.`
            : link.kind === 'held'
              ? `${link.reason} ${upper(countOfCorrections(waiting))} ${waiting === 1 ? 'is' : 'are'} kept here.`
              : waiting > 0
                ? `Storing ${countOfCorrections(waiting)}.`
                : `All is stored, revision ${formatCount(revision)}.`}
        </span>
      </p>
      <p role="status" className="text-ink-2 empty:hidden">
        {news}
      </p>
      {keeps ? null : (
        <p className="pt-1 font-strong text-amber-text">
          This browser keeps nothing for later: leave the page open until all is stored.
        </p>
      )}
      {aside.length > 0 ? (
        <section aria-label="Corrections that were not stored" className="pt-3">
          <h3 className="font-strong">Not stored</h3>
          <ul>
            {aside.map(({ gesture, reason, again }) => (
              <li key={gesture.id} className="border-b border-line py-2">
                <p>
                  <span className="font-strong">{upper(gesture.words)}.</span> {reason}
                </p>
                <p className="flex flex-wrap gap-2 pt-1">
                  {again ? (
                    <Button onClick={() => session.tryAgain(gesture.id)}>Do it all the same</Button>
                  ) : null}
                  <Button kind="bare" onClick={() => session.forget(gesture.id)}>
                    Let it go
                  </Button>
                </p>
              </li>
            ))}
          </ul>
        </section>
      ) : null}
    </div>
  );
}

const upper = (words: string) => words.charAt(0).toUpperCase() + words.slice(1);

/** Says that numbers are older than the tracks, until they have been computed again. */
export function StaleResults({ session }: { session: EditSession }) {
  const since = useEdit(session.state, (state) => state.staleSince);
  if (since === null) return null;
  return (
    <StaleLine what="The numbers are older than the tracks.">
      They are computed again after a quiet minute.
    </StaleLine>
  );
}
