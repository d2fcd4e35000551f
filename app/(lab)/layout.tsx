import type { ReactNode } from 'react';
import { getViewer, requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { QueryProvider } from '@/components/data/query-provider';
import { Head } from '@/components/shell/head';
import type { Place } from '@/components/shell/places';
import { SignInAgain } from '@/components/shell/sign-in-again';
import { switchLab } from './actions';
import { waitingForReview } from './review/waiting';

/** Head and store of answers around every page of a laboratory. */
export default async function LabLayout({ children }: { children: ReactNode }) {
  await requireViewer('own-account');
  const viewer = (await getViewer())!;
  const waiting = await waitingForReview(viewer);
  const places: Place[] = [
    { href: '/', label: 'Overview' },
    { href: '/campaigns', label: 'Campaigns' },
    ...(may(viewer, 'see-data') ? [{ href: '/analyses', label: 'Analyses' }] : []),
    ...(may(viewer, 'see-review') ? [{ href: '/review', label: 'Review', count: waiting }] : []),
    ...(may(viewer, 'see-data') ? [{ href: '/rehearsals', label: 'Rehearsals' }] : []),
    ...(may(viewer, 'compare') ? [{ href: '/compare', label: 'Compare' }] : []),
    ...(may(viewer, 'see-exports') ? [{ href: '/exports', label: 'Exports' }] : []),
    { href: '/lab', label: 'Lab' },
  ];
  const labs = viewer.labs.map(({ id, name }) => ({ id, name, current: id === viewer.labId }));
  return (
    <QueryProvider>
      <Head
        places={places}
        viewer={{ name: viewer.name, accountHref: '/account', labs }}
        switchLab={switchLab}
      />
      {children}
      <SignInAgain email={viewer.email} />
    </QueryProvider>
  );
}
