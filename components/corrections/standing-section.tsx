'use client';

import { useQueryClient } from '@tanstack/react-query';
import Link from 'next/link';
import { useEffect, useRef, useState } from 'react';
import { api } from '@/components/data/api-client';
import { analysisKey, analysisPath } from '@/components/data/use-analysis';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { Moment } from '@/components/ui/moment';
import { StaleLine } from '@/components/ui/page-states';
import { Facts, Section } from '@/components/ui/sheet';
import { formatCount } from '@/lib/format/count';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { useOtherCorrected } from './use-other-corrected';

interface StandingSectionProps {
  analysis: AnalysisView;
  /** Why this person can't sign off, for all time; null where they may. */
  signOffReason: string | null;
}

/** How many corrections, whether results fit the tracks, and the sign-off. */
export function StandingSection({ analysis, signOffReason }: StandingSectionProps) {
  const client = useQueryClient();
  const [asking, setAsking] = useState(false);
  const { staleSince, signedOff, correctionsRevision } = analysis;
  const wasStale = useRef(staleSince !== null);
  useEffect(() => {
    // New results: all that was read of the old ones is asked for again.
    if (wasStale.current && staleSince === null) {
      void client.invalidateQueries({ queryKey: ['analysis', analysis.id] });
    }
    wasStale.current = staleSince !== null;
  }, [client, analysis.id, staleSince]);

  async function signOff() {
    const signed = await api<AnalysisView>(`${analysisPath(analysis.id)}/sign-off`, {
      method: 'POST',
      revision: analysis.revision,
    });
    client.setQueryData(analysisKey(analysis.id), signed);
  }
  const notYet =
    analysis.state !== 'done'
      ? 'Only a finished analysis can be signed off.'
      : staleSince
        ? 'It can be signed off once the new results are there.'
        : null;
  const history = `/analyses/${analysis.id}/history`;
  // Only where nothing was corrected yet is it likely that somebody looks for what they did before.
  const others = useOtherCorrected(analysis, correctionsRevision === 0 && !signedOff);
  const elsewhere = others.data?.[0];
  return (
    <Section title="Corrections and sign-off">
      {staleSince ? (
        <StaleLine what="Results are older than the tracks.">
          Tracks were corrected <Moment at={staleSince} />; estimates, distributions and candidates are
          measured again when nobody has corrected for a minute.
        </StaleLine>
      ) : null}
      <Facts
        items={[
          {
            name: 'Corrections',
            value: (
              <Link href={history}>
                {correctionsRevision === 0
                  ? 'none so far'
                  : `${formatCount(correctionsRevision)}, see history`}
              </Link>
            ),
          },
          {
            name: 'Signed off',
            value: signedOff ? (
              <>
                <Moment at={signedOff.at} />
                {signedOff.by ? ` by ${signedOff.by.name}` : null}
                <span className="block break-all text-small tabular-nums">
                  Content SHA-256 {signedOff.contentHash}
                </span>
              </>
            ) : (
              'not yet'
            ),
          },
        ]}
      />
      {elsewhere && correctionsRevision === 0 && !signedOff ? (
        <p className="pt-2 text-note">
          Another analysis of this recording, of <Moment at={elsewhere.createdAt} />, has{' '}
          {formatCount(elsewhere.correctionsRevision)}{' '}
          {elsewhere.correctionsRevision === 1 ? 'correction' : 'corrections'}.{' '}
          <Link href={`${history}#carry`}>See what can be carried here</Link>
        </p>
      ) : null}
      {signedOff ? null : (
        <div className="pt-2">
          <Button reason={signOffReason ?? notYet} onClick={() => setAsking(true)}>
            Sign off
          </Button>
        </div>
      )}
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question="Sign off this analysis?"
        keep="Leave it open"
        act="Sign it off"
        onAct={signOff}
      >
        Its tracks, corrections, verdicts, measures and estimates are frozen as they are now. Nobody can
        change them afterwards, nor take the sign-off back: a change needs a new analysis. Its content gets a
        SHA-256 that stands on this page and in exports.
      </ConfirmDialog>
    </Section>
  );
}
