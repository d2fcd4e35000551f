import type { Metadata } from 'next';
import { ReviewDesk } from '@/components/review/review-desk';
import { isId } from '@/lib/ids';
import { reviewKeysOf } from '@/lib/review/review-keys';
import { storedReviewKeys } from '@/models/queries/review-keys';
import { loadDesk } from './load-desk';

interface Props {
  params: Promise<{ analysisId: string }>;
  searchParams: Promise<{ candidate?: string | string[] }>;
}

const load = (analysisId: string) => loadDesk('review', analysisId, `/review/${analysisId}`);

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Candidates of ${(await load((await params).analysisId)).analysis.recordingName}` };
}

export default async function ReviewDeskPage({ params, searchParams }: Props) {
  const { analysisId } = await params;
  const { candidate } = await searchParams;
  const { viewer, campaign, scale, owner, levels } = await load(analysisId);
  const keys = reviewKeysOf(await storedReviewKeys(viewer.labId, viewer.userId));
  return (
    <ReviewDesk
      key={analysisId}
      analysisId={analysisId}
      owner={owner}
      scale={scale}
      keys={keys}
      levels={[...levels, { kind: 'Desk', name: 'Review', href: `/review/${analysisId}` }]}
      readings={campaign.readings}
      first={typeof candidate === 'string' && isId(candidate) ? candidate : null}
    />
  );
}
