import type { ReactNode } from 'react';
import { may, type Viewer } from '@/auth/viewer';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { TabLinks } from '@/components/ui/tabs';
import { pathLevels } from '../path-levels';

export type LabTab = 'people' | 'tokens' | 'queue' | 'storage' | 'mail' | 'audit';

/** Title and tabs around each part of the laboratory's own pages; only what the viewer may open. */
export function LabFrame({
  viewer,
  tab,
  margin,
  children,
}: {
  viewer: Viewer;
  tab: LabTab;
  margin?: ReactNode;
  children: ReactNode;
}) {
  const tabs = [
    { href: '/lab', key: 'people', label: 'People', open: may(viewer, 'see-people') },
    { href: '/lab/tokens', key: 'tokens', label: 'Tokens', open: may(viewer, 'own-tokens') },
    { href: '/lab/queue', key: 'queue', label: 'Queue and workers', open: may(viewer, 'see-queue') },
    { href: '/lab/storage', key: 'storage', label: 'Storage', open: may(viewer, 'see-storage') },
    { href: '/lab/mail', key: 'mail', label: 'Mail', open: may(viewer, 'see-mail') },
    { href: '/lab/audit', key: 'audit', label: 'Audit trail', open: may(viewer, 'see-audit') },
  ].filter(({ open }) => open);
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Sheet margin={margin}>
        <PageTitle>{viewer.lab.name}</PageTitle>
        <TabLinks
          label="Parts of the laboratory"
          tabs={tabs.map(({ href, label, key }) => ({ href, label, current: key === tab }))}
        />
        <div className="pt-4">{children}</div>
      </Sheet>
    </>
  );
}
