import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { signInWith } from '@/auth/sign-in';
import { models } from '@/models';
import { execute } from '@/models/queries/select';
import { webSettings } from '../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeTestLab, type LabPerson } from '../helpers/test-lab';

let database: FreshDatabase;
let person: LabPerson;
let addresses = 0;
const anyAddress = () => `192.0.2.${(addresses += 1)}`;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  person = (await makeTestLab(database.url)).people.analyst;
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

describe('signing in', () => {
  it('with the right password answers the account, whatever the case of the e-mail', async () => {
    const result = await signInWith(person.email.toUpperCase(), person.password, anyAddress());
    expect(result).toEqual({ ok: true, person: { id: person.userId, sessionVersion: 1 } });
  });

  it('a wrong password and an unknown account are told apart by nothing', async () => {
    const wrong = await signInWith(person.email, 'not the password', anyAddress());
    const unknown = await signInWith('nobody@lab.test', 'not the password', anyAddress());
    expect(wrong).toEqual({ ok: false, waitS: null });
    expect(unknown).toEqual(wrong);
  });

  it('five tries of an account in a quarter of an hour, from anywhere, then a wait even with the right password', async () => {
    const email = 'five-tries@lab.test';
    for (let i = 0; i < 5; i++) {
      expect(await signInWith(email, 'wrong', anyAddress())).toEqual({ ok: false, waitS: null });
    }
    const sixth = await signInWith(email, 'wrong', anyAddress());
    expect(sixth.ok).toBe(false);
    const { waitS } = sixth as { waitS: number };
    expect(waitS > 0 && waitS <= 15 * 60).toBe(true);
  });

  it('the wait ends by itself after a quarter of an hour', async () => {
    await execute(`UPDATE rate_counters SET window_start = window_start - interval '15 minutes'`);
    expect(await signInWith('five-tries@lab.test', 'wrong', anyAddress())).toEqual({
      ok: false,
      waitS: null,
    });
  });

  it('a good sign-in forgets the tries before it', async () => {
    for (let i = 0; i < 4; i++) await signInWith(person.email, 'wrong', anyAddress());
    expect((await signInWith(person.email, person.password, anyAddress())).ok).toBe(true);
    expect(await signInWith(person.email, 'wrong', anyAddress())).toEqual({ ok: false, waitS: null });
  });

  it('of many tries side by side from one address at most thirty get through, whoever they are for', async () => {
    const address = anyAddress();
    const tries = Array.from({ length: 40 }, (_, i) => signInWith(`many-${i}@lab.test`, 'wrong', address));
    const results = await Promise.all(tries);
    expect(results.filter((result) => !result.ok && result.waitS === null).length).toBeLessThanOrEqual(30);
    expect((await signInWith('many-more@lab.test', 'wrong', address)) as { waitS: number }).toMatchObject({
      waitS: expect.any(Number),
    });
  }, 60_000);

  it('failures are written down without what was typed', async () => {
    const entries = await models().AuditEntry.findAll({ where: { action: 'sign-in.failed' } });
    expect(entries.length).toBeGreaterThan(30);
    expect(JSON.stringify(entries)).not.toContain('wrong');
  });

  it('a disabled account can’t', async () => {
    await models().User.update({ disabledAt: new Date() }, { where: { id: person.userId } });
    expect(await signInWith(person.email, person.password, anyAddress())).toEqual({ ok: false, waitS: null });
    await models().User.update({ disabledAt: null }, { where: { id: person.userId } });
  });
});
