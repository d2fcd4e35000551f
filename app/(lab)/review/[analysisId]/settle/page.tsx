import type { Metadata } from 'next';
import { SettleDesk } from '@/components/review/settle-desk';
import { isId } from '@/lib/ids';
import { reviewKeysOf } from '@/lib/review/review-keys';
import { storedReviewKeys } from '@/models/queries/review-keys';
import { loadDesk } from '../load-desk';

interface Props {
  params: Promise<{ analysisId: string }>;
  searchParams: Promise<{ candidate?: string | string[] }>;
}

const load = (analysisId: string) => loadDesk('settle', analysisId, `/review/${analysisId}/settle`);

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Disagreements on ${(await load((await params).analysisId)).analysis.recordingName}` };
}

export default async function SettleDeskPage({ params, searchParams }: Props) {
  const { analysisId } = await params;
  const { candidate } = await searchParams;
  const { viewer, scale, levels } = await load(analysisId);
  const keys = reviewKeysOf(await storedReviewKeys(viewer.labId, viewer.userId));
  return (
    <SettleDesk
      key={analysisId}
      analysisId={analysisId}
      scale={scale}
      playKey={keys.play}
      levels={[...levels, { kind: 'Desk', name: 'Settle', href: `/review/${analysisId}/settle` }]}
      first={typeof candidate === 'string' && isId(candidate) ? candidate : null}
    />
  );
}
