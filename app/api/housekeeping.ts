import { dropOldKeys } from '@/auth/idempotency';
import { log } from '@/auth/log';
import { dropOldWindows } from '@/auth/rate-limit';
import { askForNightlyChecks } from '@/jobs/check-files';
import { dropExport } from '@/jobs/exports/export-folder';
import { dropKeptMail } from '@/jobs/mail/keep-mail';
import { limit } from '@/lib/env';
import { expireExports } from '@/models/queries/exports';
import { dropOldMails } from '@/models/queries/mails';
import { dropOldSessions } from '@/models/queries/sessions';
import { forgetEmptyFolders, reconcileUploads } from './uploads/reconcile-uploads';

const EVERY_MS = 3_600_000;
/** Mail is shown for so long. */
const MAIL_DAYS = 90;
/** After a failure, as while the database is away. */
const AGAIN_MS = 15_000;

const shared = globalThis as unknown as { beadlineHousekeeping?: NodeJS.Timeout };

/** Settles what a crash has left, now and every hour. Started once per web process. */
export function startHousekeeping(): void {
  if (shared.beadlineHousekeeping) return;
  const turn = async () => {
    let nextMs = EVERY_MS;
    try {
      await reconcileUploads();
      await forgetEmptyFolders();
      await dropOldWindows();
      await dropOldKeys();
      await dropOldSessions();
      await dropOldMails(MAIL_DAYS);
      await dropKeptMail(MAIL_DAYS);
      for (const id of await expireExports()) await dropExport(id);
      await askForNightlyChecks(new Date(), limit('nightlyCheckBytes'));
    } catch (err) {
      log.warn({ err }, 'housekeeping failed, tried again soon');
      nextMs = AGAIN_MS;
    }
    shared.beadlineHousekeeping = setTimeout(turn, nextMs);
    shared.beadlineHousekeeping.unref();
  };
  shared.beadlineHousekeeping = setTimeout(turn, 0);
}
