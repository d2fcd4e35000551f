// `npm run build`: command-line programs and web server, each only where its sources have changed.
import { ensureBundles } from './platform/bundles.mjs';
import { ensurePackages } from './platform/ensure-packages.mjs';
import { runToExit } from './platform/plain-stop.mjs';
import { sayOn } from './platform/say.mjs';
import { ensureWebBuild } from './platform/web-build.mjs';

await runToExit(async () => {
  const say = sayOn(process.stdout);
  await ensurePackages(say);
  await ensureBundles({ say });
  await ensureWebBuild(say);
});
