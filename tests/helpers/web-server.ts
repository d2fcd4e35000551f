import { spawn } from 'node:child_process';
import { freePort } from '@/scripts/platform/free-port.mjs';
import { nextCommand } from '@/scripts/platform/web-build.mjs';

export interface WebServer {
  baseUrl: string;
  pid: number;
  end(signal?: NodeJS.Signals): Promise<void>;
}

/** A web server alone, with settings of its own; it need not be ready, nor able to become so. */
export async function startWebServer(settings: Record<string, string>): Promise<WebServer> {
  const port = await freePort();
  const [program, ...args] = nextCommand('start', '-H', '127.0.0.1', '-p', String(port));
  const baseUrl = `http://127.0.0.1:${port}`;
  const { PATH, HOME } = process.env;
  const child = spawn(program!, args, {
    cwd: process.cwd(),
    stdio: 'ignore',
    env: {
      ...{ PATH, HOME, NODE_ENV: 'production', BEADLINE_ROOT: process.cwd() },
      ...{ NEXTAUTH_SECRET: 'a secret of this server alone', NEXTAUTH_URL: baseUrl },
      ...settings,
    },
  });
  const gone = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  return {
    baseUrl,
    pid: child.pid!,
    async end(signal = 'SIGTERM') {
      child.kill(signal);
      await gone;
    },
  };
}
