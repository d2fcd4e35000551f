// `npm run backup -- FILE`: database, uploads and stacks in one file, while the product runs or stands.
import { existsSync } from 'node:fs';
import { contentWords, fileArgument } from './platform/backup-words.mjs';
import { ensurePackages } from './platform/ensure-packages.mjs';
import { makeBackup } from './platform/make-backup.mjs';
import { dataFolder } from './platform/paths.mjs';
import { PlainStop, runToExit } from './platform/plain-stop.mjs';
import { sayOn } from './platform/say.mjs';
import { readStartSettings } from './platform/start-settings.mjs';

await runToExit(async () => {
  const say = sayOn(process.stderr);
  const data = dataFolder(process.env);
  const path = fileArgument('backup', data);
  if (existsSync(path)) throw new PlainStop(`${path} is there already: name a new file.`, 2);
  await ensurePackages(say);
  const databaseUrl = readStartSettings(process.env).ownerUrl ?? undefined;
  const manifest = await makeBackup(data, path, { say, databaseUrl });
  process.stdout.write(
    `Backup ${path}: ${contentWords(manifest)}.\n` +
      'Left out: the key of sessions and the passwords of the database, which a restore makes anew; logs.\n' +
      'It holds all that the laboratory has: keep it where only you can read it.\n',
  );
  return 0;
});
