import type { QueryInterface } from 'sequelize';
import * as createTables from './20261201120000-create-tables';
import * as indexPointsByTrack from './20261201121000-index-points-by-track';
import * as addUploadMetadataAndQuota from './20261201122000-add-upload-metadata-and-quota';
import * as addMotionMeasures from './20261201130000-add-motion-measures';
import * as addMailAndFileChecks from './20261201140000-add-mail-and-file-checks';
import * as addCorrections from './20261201150000-add-corrections';
import * as addVerdicts from './20261201151000-add-verdicts';
import * as sealVerdicts from './20261201151500-seal-verdicts';
import * as addFlowDetails from './20261201153000-add-flow-details';
import * as addRehearsals from './20261201154000-add-rehearsals';
import * as rememberWhatAKeyMade from './20261201155000-remember-what-a-key-made';
import * as addFlowParts from './20261202140000-add-flow-parts';
import * as addSessions from './20261202130000-add-sessions';
import * as addMarksOfLines from './20261202150000-add-marks-of-lines';
import * as addExports from './20261201152000-add-exports';
import * as mixKnownCandidates from './20261202110000-mix-known-candidates';
import * as addSelectionsAndExclusions from './20261202120000-add-selections-and-exclusions';

export interface Migration {
  /** File name without its ending: the same for sources and bundles. */
  name: string;
  up(queryInterface: QueryInterface): Promise<void>;
  down(queryInterface: QueryInterface): Promise<void>;
}

/** Every migration, oldest first. A migration that has shipped is never edited. */
export const migrations: Migration[] = [
  { name: '20261201120000-create-tables', ...createTables },
  { name: '20261201121000-index-points-by-track', ...indexPointsByTrack },
  { name: '20261201122000-add-upload-metadata-and-quota', ...addUploadMetadataAndQuota },
  { name: '20261201130000-add-motion-measures', ...addMotionMeasures },
  { name: '20261201140000-add-mail-and-file-checks', ...addMailAndFileChecks },
  { name: '20261201150000-add-corrections', ...addCorrections },
  { name: '20261201151000-add-verdicts', ...addVerdicts },
  { name: '20261201151500-seal-verdicts', ...sealVerdicts },
  { name: '20261201152000-add-exports', ...addExports },
  { name: '20261201153000-add-flow-details', ...addFlowDetails },
  { name: '20261201154000-add-rehearsals', ...addRehearsals },
  { name: '20261201155000-remember-what-a-key-made', ...rememberWhatAKeyMade },
  { name: '20261202110000-mix-known-candidates', ...mixKnownCandidates },
  { name: '20261202120000-add-selections-and-exclusions', ...addSelectionsAndExclusions },
  { name: '20261202130000-add-sessions', ...addSessions },
  { name: '20261202140000-add-flow-parts', ...addFlowParts },
  { name: '20261202150000-add-marks-of-lines', ...addMarksOfLines },
];
