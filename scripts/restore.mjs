// `npm run restore -- FILE`: a backup into an empty data folder, checked against its manifest before and after.
import { contentWords, fileArgument } from './platform/backup-words.mjs';
import { ensurePackages } from './platform/ensure-packages.mjs';
import { dataFolder } from './platform/paths.mjs';
import { runToExit } from './platform/plain-stop.mjs';
import { restoreBackup } from './platform/restore-backup.mjs';
import { sayOn } from './platform/say.mjs';
import { readStartSettings } from './platform/start-settings.mjs';

await runToExit(async () => {
  const say = sayOn(process.stderr);
  const data = dataFolder(process.env);
  const path = fileArgument('restore', data);
  await ensurePackages(say);
  const databaseUrl = readStartSettings(process.env).ownerUrl ?? undefined;
  const manifest = await restoreBackup(path, data, { say, databaseUrl });
  process.stdout.write(
    `Restored into ${data}: ${contentWords(manifest)}, as on ${manifest.madeAt}.\n` +
      'Before writing: every file had the SHA-256 of the manifest.\n' +
      'After writing: every file has it again, and every table has the rows of the manifest.\n' +
      'The key of sessions is new: everybody signs in again. Start with: npm start\n',
  );
  return 0;
});
