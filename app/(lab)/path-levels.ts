import type { Viewer } from '@/auth/viewer';
import type { PathLevel } from '@/components/ui/path-thread';

interface Named {
  id: string;
  name: string;
}

/** The way from the laboratory down to a page, as far as it goes. */
export function pathLevels(
  viewer: Viewer,
  way: { campaign?: Named; run?: Named; rehearsal?: Named | null; recording?: Named; analysis?: Named } = {},
): PathLevel[] {
  const levels: PathLevel[] = [{ kind: 'Lab', name: viewer.lab.name, href: '/' }];
  // The run of a rehearsal is there for the machine; people know it by the rehearsal.
  if (way.rehearsal) {
    levels.push({ kind: 'Rehearsal', name: way.rehearsal.name, href: `/rehearsals/${way.rehearsal.id}` });
  }
  if (way.campaign && !way.rehearsal)
    levels.push({ kind: 'Campaign', name: way.campaign.name, href: `/campaigns/${way.campaign.id}` });
  if (way.run && !way.rehearsal)
    levels.push({ kind: 'Run', name: way.run.name, href: `/runs/${way.run.id}` });
  if (way.recording) {
    levels.push({ kind: 'Recording', name: way.recording.name, href: `/recordings/${way.recording.id}` });
  }
  if (way.analysis)
    levels.push({ kind: 'Analysis', name: way.analysis.name, href: `/analyses/${way.analysis.id}` });
  return levels;
}
