import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { mayTo } from '@/auth/viewer';
import { AuditTable } from '@/components/lab/audit-table';
import { LabFrame } from '../lab-frame';

export const metadata: Metadata = { title: 'Audit trail' };

export default async function AuditPage() {
  const viewer = await requireViewer('see-audit', '/lab/audit');
  return (
    <LabFrame viewer={viewer} tab="audit">
      <Suspense>
        <AuditTable ofEverybody={mayTo(viewer, 'see-audit', [])} />
      </Suspense>
    </LabFrame>
  );
}
