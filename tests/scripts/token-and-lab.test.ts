import { execFile } from 'node:child_process';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { hashLinkSecret } from '@/lib/link-secret';
import { hashToken } from '@/auth/tokens';
import { findLinkOwner } from '@/models/queries/account-links';
import { models } from '@/models';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeTestLab, type TestLab } from '../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;

beforeAll(async () => {
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

/** Runs a command as `npm run` does. */
async function run(name: string, ...args: string[]) {
  const script = join(process.cwd(), 'scripts', `${name}.mjs`);
  const env = { ...process.env, DATABASE_URL: database.url, NEXTAUTH_URL: 'http://lab.test' };
  return promisify(execFile)(process.execPath, [script, ...args], { env }).then(
    ({ stdout }) => ({ code: 0, stdout, stderr: '' }),
    (error: { code: number; stdout: string; stderr: string }) => error,
  );
}

describe('the token command', () => {
  it('prints the token alone, good for all that the roles allow', async () => {
    const { stdout } = await run('token', '--email', lab.people.analyst.email, '--name', 'Notebook');
    expect(stdout).toMatch(/^\S+\n$/);
    const row = await models().ApiToken.findOne({ where: { tokenHash: hashToken(stdout.trim()) } });
    expect(row).toMatchObject({ labId: lab.labId, userId: lab.people.analyst.userId, name: 'Notebook' });
    expect(row?.scopes).toEqual(['read', 'write', 'export']);
  });

  it('narrows it to the scopes that are named', async () => {
    const { stdout } = await run(
      'token',
      '--email',
      lab.people.analyst.email,
      '--name',
      'N',
      '--scopes',
      'read',
    );
    const row = await models().ApiToken.findOne({ where: { tokenHash: hashToken(stdout.trim()) } });
    expect(row?.scopes).toEqual(['read']);
  });

  it.each([
    [[]],
    [['--email', 'nobody@lab.test', '--name', 'N']],
    [['--email', 'ANALYST', '--name', 'N', '--scopes', 'fly']],
    [['--email', 'ANALYST', '--name', 'N', '--scopes', 'review']],
    [['--email', 'ANALYST', '--name', 'N', '--lab', 'elsewhere']],
    [['--colour', 'red']],
  ])('%j ends with 2 and one sentence', async (args) => {
    const given = args.map((arg) => (arg === 'ANALYST' ? lab.people.analyst.email : arg));
    const { code, stdout, stderr } = await run('token', ...given);
    expect([code, stdout, stderr.trim().split('\n').length]).toEqual([2, '', 1]);
  });
});

describe('the lab command', () => {
  it('makes a laboratory and prints an invitation that opens the account', async () => {
    const { stdout } = await run('lab', '--name', 'Vortex Lab, Åbo', '--email', 'first@abo.test');
    const link = /^http:\/\/lab\.test\/invitation\/(\S+)\n$/.exec(stdout);
    expect(await findLinkOwner(hashLinkSecret(link![1]), 'invitation')).toMatchObject({
      email: 'first@abo.test',
    });
    const made = await models().Lab.findOne({ where: { name: 'Vortex Lab, Åbo' } });
    expect(made?.slug).toBe('vortex-lab-abo');
    expect(await models().Membership.count({ where: { labId: made!.id } })).toBe(1);
  });

  it('refuses a name that is taken, and an e-mail that is none', async () => {
    expect((await run('lab', '--name', 'vortex lab åbo', '--email', 'x@abo.test')).code).toBe(2);
    expect((await run('lab', '--name', 'New', '--email', 'no e-mail')).code).toBe(2);
  });

  it('bounds what one laboratory may keep, and puts it back under the bound of all', async () => {
    const quota = async () => (await models().Lab.findOne({ where: { slug: 'vortex-lab-abo' } }))?.quotaBytes;
    const { stdout } = await run('lab', '--name', 'Vortex Lab, Åbo', '--quota-gb', '2.5');
    expect([stdout, await quota()]).toEqual(['Vortex Lab, Åbo may keep 2.50 GB.\n', '2500000000']);
    expect((await run('lab', '--name', 'Vortex Lab, Åbo', '--quota-gb', '0')).stdout).toContain('5.00 TB');
    expect(await quota()).toBeNull();
    expect((await run('lab', '--name', 'Nowhere', '--quota-gb', '1')).code).toBe(2);
    expect((await run('lab', '--name', 'Vortex Lab, Åbo', '--quota-gb', 'much')).code).toBe(2);
  });
});
