import { assessRehearsalHandler } from './assess-rehearsal.handler';
import { buildExportHandler } from './build-export.handler';
import { checkFilesHandler } from './check-files.handler';
import { composeStripsHandler } from './compose-strips.handler';
import { detectSpotsHandler } from './detect-spots.handler';
import { ingestRecordingHandler } from './ingest-recording.handler';
import type { JobHandler } from './job-context';
import { linkTracksHandler } from './link-tracks.handler';
import { measureFlowHandler } from './measure-flow.handler';
import { measureImageHandler } from './measure-image.handler';
import { remeasureTracksHandler } from './remeasure-tracks.handler';
import { sendMailHandler } from './send-mail.handler';
import { simulateRehearsalHandler } from './simulate-rehearsal.handler';

const handlers = [
  ingestRecordingHandler,
  measureImageHandler,
  detectSpotsHandler,
  linkTracksHandler,
  measureFlowHandler,
  remeasureTracksHandler,
  sendMailHandler,
  checkFilesHandler,
  composeStripsHandler,
  buildExportHandler,
  simulateRehearsalHandler,
  assessRehearsalHandler,
] as unknown as JobHandler[];

/** Every kind of work and who does it. */
export const HANDLERS: ReadonlyMap<string, JobHandler> = new Map(
  handlers.map((handler) => [handler.definition.kind, handler]),
);
