import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import type { CampaignView } from '@/lib/views/campaign-view';
import type { ListView, ProblemView } from '@/lib/views/common';
import { models } from '@/models';
import { callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let token: string;

const NAMES = ['delta', 'Alpha', 'charlie', 'Bravo', 'echo', 'alpha', '100 %', 'a_b'];

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  const lab = await makeTestLab(database.url);
  const person = lab.people.experimentalist;
  token = person.token;
  for (const name of NAMES) {
    const tags = name.length === 5 ? ['five'] : [];
    await models().Campaign.create({ id: newId(), labId: lab.labId, name, tags, createdBy: person.userId });
  }
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

const list = (query: string) =>
  callJson<ListView<CampaignView>>('GET', `/api/v1/campaigns${query}`, { token });
const refusal = (query: string) => callJson<ProblemView>('GET', `/api/v1/campaigns${query}`, { token });

/** All pages of a list, one after the other. */
async function allPages(query: string): Promise<string[]> {
  const names: string[] = [];
  let cursor: string | null = null;
  do {
    const page: ListView<CampaignView> = (await list(`${query}${cursor ? `&cursor=${cursor}` : ''}`)).body;
    names.push(...page.items.map(({ name }) => name));
    cursor = page.nextCursor;
  } while (cursor !== null);
  return names;
}

describe('lists', () => {
  it.each(['name', '-name', 'createdAt', '-createdAt', 'updatedAt', 'runs', '-recordings'])(
    'pages by %s give every item once, in the order of one long page',
    async (sort) => {
      const whole = (await list(`?sort=${sort}&limit=200`)).body;
      expect(whole.nextCursor).toBeNull();
      const pages = await allPages(`?sort=${sort}&limit=3`);
      expect(pages).toEqual(whole.items.map(({ name }) => name));
      expect([...pages].sort()).toEqual([...NAMES].sort());
    },
  );

  it('names are sorted whatever their case', async () => {
    const names = (await list('?sort=name')).body.items.map(({ name }) => name.toLowerCase());
    expect(names).toEqual([...names].sort());
  });

  it('a page whose length is the whole list has no next cursor', async () => {
    expect((await list(`?limit=${NAMES.length}`)).body.nextCursor).toBeNull();
  });

  it('an item that is removed while paging disturbs no other item', async () => {
    const first = (await list('?sort=name&limit=3')).body;
    const { id } = first.items[2];
    await callJson('DELETE', `/api/v1/campaigns/${id}`, { token });
    const rest = (await list(`?sort=name&limit=200&cursor=${first.nextCursor}`)).body;
    expect(first.items.length + rest.items.length).toBe(NAMES.length);
    await callJson('POST', `/api/v1/campaigns/${id}/restore`, { token });
  });

  it('a search takes % and _ for themselves', async () => {
    expect((await list('?q=%25')).body.items.map(({ name }) => name)).toEqual(['100 %']);
    expect((await list('?q=a_b')).body.items.map(({ name }) => name)).toEqual(['a_b']);
  });

  it('filters narrow the list', async () => {
    const tagged = (await list('?tag=five')).body.items;
    expect(tagged.map(({ name }) => name).sort()).toEqual(NAMES.filter((name) => name.length === 5).sort());
  });

  it('what is removed is out of the list, and in the list of removed things until it is restored', async () => {
    const { id } = (await list('?q=delta')).body.items[0];
    expect((await callJson('DELETE', `/api/v1/campaigns/${id}`, { token })).status).toBe(204);
    expect((await list('?q=delta')).body.items).toEqual([]);
    expect((await list('?q=delta&deleted=only')).body.items.map((item) => item.id)).toEqual([id]);
    expect((await callJson('POST', `/api/v1/campaigns/${id}/restore`, { token })).status).toBe(200);
    expect((await list('?q=delta')).body.items).toHaveLength(1);
  });

  // B42 of the table of bad input: a column that is not in the list, a negative or absurd number.
  it.each([
    ['?sort=x', "Unknown sort field 'x'."],
    ['?sort=name;drop', "Unknown sort field 'name;drop'."],
    ['?limit=-1', 'limit must be a whole number from 1 to 200.'],
    ['?limit=0', 'limit must be a whole number from 1 to 200.'],
    ['?limit=1000000000', 'limit must be a whole number from 1 to 200.'],
    ['?limit=1e9', 'limit must be a whole number from 1 to 200.'],
    ['?page=-1', "Unknown parameter 'page'."],
    ['?cursor=nonsense', 'This cursor does not belong to this list and order.'],
  ])('%s is refused by name', async (query, sentence) => {
    const { status, body, headers } = await refusal(query);
    expect([status, body.code, body.detail]).toEqual([400, 'QUERY', sentence]);
    expect(headers.get('content-type')).toBe('application/problem+json');
  });

  it('a cursor of another order, or forged, is refused', async () => {
    const { nextCursor } = (await list('?sort=name&limit=2')).body;
    expect((await refusal(`?sort=createdAt&limit=2&cursor=${nextCursor}`)).body.code).toBe('QUERY');
    const forged = Buffer.from(JSON.stringify(['createdAt', 'not a time', 'not an id'])).toString(
      'base64url',
    );
    expect((await refusal(`?sort=createdAt&cursor=${forged}`)).body.code).toBe('QUERY');
  });
});
