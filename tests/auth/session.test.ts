import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import {
  LAB_COOKIE,
  readSession,
  renewedSession,
  SESSION_ABSOLUTE_S,
  SESSION_IDLE_S,
  sessionCookieName,
  writeSession,
} from '@/auth/session-cookie';
import { hashToken } from '@/auth/tokens';
import { viewerFrom } from '@/auth/viewer';
import { newId } from '@/lib/ids';
import type { ProblemView } from '@/lib/views/common';
import { models } from '@/models';
import { callJson, webSettings } from '../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeTestLab, type TestLab } from '../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;
let userId: string;
let cookie: string;
const nowS = () => Math.floor(Date.now() / 1000);

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  ({ userId } = lab.people.experimentalist);
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));
beforeEach(async () => {
  const { sessionVersion } = (await models().User.findByPk(userId))!;
  const value = await writeSession({ userId, sessionVersion, labId: null, signedInAt: nowS() }, nowS());
  cookie = `${sessionCookieName()}=${value}`;
});

const viewer = (headers: Record<string, string>) => viewerFrom(new Headers(headers));

describe('sessions', () => {
  it('name the person, the laboratory and the rights', async () => {
    expect(await viewer({ cookie })).toMatchObject({
      userId,
      labId: lab.labId,
      roles: ['experimentalist'],
      via: 'session',
    });
  });

  it('end when the account’s session version is raised', async () => {
    await models().User.increment('sessionVersion', { where: { id: userId } });
    expect(await viewer({ cookie })).toBeNull();
  });

  it('end when the account is disabled or its membership taken away', async () => {
    await models().User.update({ disabledAt: new Date() }, { where: { id: userId } });
    expect(await viewer({ cookie })).toBeNull();
    await models().User.update({ disabledAt: null }, { where: { id: userId } });
    const membership = (await models().Membership.findOne({ where: { userId } }))!;
    await membership.destroy();
    expect(await viewer({ cookie })).toBeNull();
    await models().Membership.create({ id: newId(), labId: lab.labId, userId, roles: ['experimentalist'] });
  });

  it('are not believed when forged or cut', async () => {
    for (const value of ['', 'x', cookie.slice(0, -5), `${sessionCookieName()}=a.b.c.d.e`]) {
      expect(await viewer({ cookie: value })).toBeNull();
    }
  });

  it('end a day after signing in, however much they are used', async () => {
    const long = { userId, sessionVersion: 1, labId: null, signedInAt: nowS() - SESSION_ABSOLUTE_S - 1 };
    expect(await readSession(await writeSession(long, nowS()), nowS())).toBeNull();
  });

  it('are renewed with use, at most until the day is over', async () => {
    const session = {
      userId,
      sessionVersion: 1,
      labId: null,
      signedInAt: nowS() - 23.5 * 3600,
      issuedAt: nowS() - 3600,
    };
    const renewed = await renewedSession(session, nowS());
    expect(await readSession(renewed!, nowS())).toMatchObject({ signedInAt: session.signedInAt });
    expect(await readSession(renewed!, nowS() + 3600)).toBeNull();
    expect(await renewedSession({ ...session, issuedAt: nowS() - 60 }, nowS())).toBeNull();
    expect(SESSION_IDLE_S).toBe(8 * 3600);
  });

  it('a person of two laboratories works in the one that the cookie names, if it is theirs', async () => {
    const second = await makeTestLab(database.url, 'Second');
    await models().Membership.create({ id: newId(), labId: second.labId, userId, roles: ['annotator'] });
    const inSecond = await viewer({ cookie: `${cookie}; ${LAB_COOKIE}=${second.labId}` });
    expect([inSecond?.labId, inSecond?.roles]).toEqual([second.labId, ['annotator']]);
    const third = await makeTestLab(database.url, 'Third');
    const stranger = await viewer({ cookie: `${cookie}; ${LAB_COOKIE}=${third.labId}` });
    expect(stranger?.labId).not.toBe(third.labId);
  });
});

describe('requests with a session cookie that change something', () => {
  const post = (headers: Record<string, string>) =>
    callJson<ProblemView>('POST', '/api/v1/campaigns', {
      json: { name: 'C' },
      headers: { cookie, ...headers },
    });

  it.each([
    ['our own pages by Sec-Fetch-Site', { 'sec-fetch-site': 'same-origin' }, 201],
    ['our own pages by Origin', { origin: 'http://127.0.0.1:3000' }, 201],
    ['another site', { 'sec-fetch-site': 'cross-site', origin: 'http://127.0.0.1:3000' }, 403],
    ['a neighbour on the same site', { 'sec-fetch-site': 'same-site' }, 403],
    ['another origin', { origin: 'http://evil.test' }, 403],
    ['another port', { origin: 'http://127.0.0.1:4000' }, 403],
    ['nowhere', {}, 403],
    ['an opaque origin', { origin: 'null' }, 403],
  ])('from %s', async (_, headers, status) => {
    expect((await post(headers as Record<string, string>)).status).toBe(status);
  });

  it('as a form or as plain text are refused', async () => {
    for (const type of ['text/plain', 'application/x-www-form-urlencoded', 'multipart/form-data']) {
      const headers = { cookie, 'sec-fetch-site': 'same-origin', 'content-type': type };
      const { status } = await callJson('POST', '/api/v1/campaigns', { body: '{"name":"C"}', headers });
      expect([type, status]).toEqual([type, 415]);
    }
  });

  it('with a token need no origin', async () => {
    const { token } = lab.people.experimentalist;
    expect((await callJson('POST', '/api/v1/campaigns', { token, json: { name: 'C' } })).status).toBe(201);
  });

  it('an older session gets a fresh cookie with the answer', async () => {
    const { sessionVersion } = (await models().User.findByPk(userId))!;
    const signedInAt = nowS() - 7200;
    // Issued now but read an hour on: the test moves the clock instead of waiting.
    const value = await writeSession({ userId, sessionVersion, labId: null, signedInAt }, nowS());
    const realNow = Date.now;
    Date.now = () => realNow() + 3_600_000;
    try {
      const { headers } = await callJson('GET', '/api/v1/me', {
        headers: { cookie: `${sessionCookieName()}=${value}` },
      });
      expect(headers.get('set-cookie')).toMatch(
        new RegExp(`^${sessionCookieName()}=.*HttpOnly; SameSite=Lax; Max-Age=28800`),
      );
    } finally {
      Date.now = realNow;
    }
  });
});

describe('tokens', () => {
  it('are kept as a hash, shown once, and end when revoked', async () => {
    const { token } = lab.people.experimentalist;
    const made = await callJson<{ id: string; token: string; hint: string }>('POST', '/api/v1/tokens', {
      token,
      json: { name: 'Script', scopes: ['read'] },
    });
    expect(made.status).toBe(201);
    const row = (await models().ApiToken.findByPk(made.body.id))!;
    expect(row.tokenHash.equals(hashToken(made.body.token))).toBe(true);
    const listed = await callJson('GET', '/api/v1/tokens', { token });
    expect(JSON.stringify(listed.body)).not.toContain(made.body.token);
    expect(made.body.token.startsWith(made.body.hint)).toBe(true);

    const mine = { token: made.body.token };
    expect((await callJson('GET', '/api/v1/me', mine)).body.scopes).toEqual(['read']);
    expect((await callJson('POST', '/api/v1/campaigns', { ...mine, json: { name: 'C' } })).status).toBe(403);
    expect((await callJson('DELETE', `/api/v1/tokens/${made.body.id}`, { token })).status).toBe(204);
    expect((await callJson('GET', '/api/v1/me', mine)).status).toBe(401);
  });

  it('never exceed the roles of the person, also when those shrink later', async () => {
    const { token, userId: analyst } = lab.people.analyst;
    await models().Membership.update(
      { roles: ['annotator'] },
      { where: { userId: analyst, labId: lab.labId } },
    );
    expect((await callJson('GET', '/api/v1/me', { token })).body.scopes).toEqual(['read']);
  });

  it('can’t make a token that may do more', async () => {
    const { token } = lab.people.experimentalist;
    const { body } = await callJson<{ token: string }>('POST', '/api/v1/tokens', {
      token,
      json: { name: 'Writer', scopes: ['write'] },
    });
    const more = await callJson('POST', '/api/v1/tokens', {
      token: body.token,
      json: { name: 'X', scopes: ['read'] },
    });
    expect(more.status).toBe(403);
  });

  it.each(['', 'Bearer', 'Bearer ', 'Basic abc', 'Bearer not-a-token', 'Bearer a b'])(
    '%j is nobody',
    async (authorization) => {
      expect(await viewer({ authorization, cookie })).toBeNull();
    },
  );
});

describe('roles', () => {
  it('nobody changes their own; the last administrator stays; a change ends the member’s sessions', async () => {
    const { token, userId: administrator } = lab.people.lab_administrator;
    const rows = await models().Membership.findAll({ where: { labId: lab.labId } });
    const rowOf = (id: string) => rows.find((row) => row.userId === id)!;
    const patch = (id: string, roles: string[]) =>
      callJson<ProblemView>('PATCH', `/api/v1/people/${id}`, {
        token,
        json: { roles },
        headers: { 'if-match': '*' },
      });
    expect((await patch(rowOf(administrator).id, ['analyst'])).status).toBe(403);
    const before = (await models().User.findByPk(userId))!.sessionVersion;
    const changed = await patch(rowOf(lab.people.principal_investigator.userId).id, ['lab_administrator']);
    expect(changed.status).toBe(200);
    expect((await models().User.findByPk(userId))!.sessionVersion).toBe(before);
    const touched = (await models().User.findByPk(lab.people.principal_investigator.userId))!;
    expect(touched.sessionVersion).toBe(2);
  });
});

describe('limits', () => {
  it('above the changes a minute the answer is 429 with the time to wait, and reading goes on', async () => {
    process.env.BEADLINE_LIMIT_CHANGES_PER_MINUTE = '3';
    try {
      const { token } = lab.people.principal_investigator;
      await models().Membership.update(
        { roles: ['principal_investigator'] },
        { where: { userId: lab.people.principal_investigator.userId } },
      );
      const statuses: number[] = [];
      let wait: string | null = null;
      for (let i = 0; i < 6; i++) {
        const { status, headers } = await callJson('POST', '/api/v1/campaigns', {
          token,
          json: { name: 'C' },
        });
        statuses.push(status);
        wait ??= headers.get('retry-after');
      }
      expect(statuses.filter((status) => status === 429).length).toBeGreaterThanOrEqual(1);
      expect(Number(wait)).toBeGreaterThan(0);
      expect((await callJson('GET', '/api/v1/me', { token })).status).toBe(200);
    } finally {
      delete process.env.BEADLINE_LIMIT_CHANGES_PER_MINUTE;
    }
  });
});
