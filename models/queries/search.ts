import type { SearchView } from '@/lib/views/search-view';
import { containing } from './list-page';
import { selectRows } from './select';

/** Of each kind at most. */
const FOUND_MOST = 10;

/** `column` holds every word, in any order and case. */
const holds = (column: string, bind: unknown[], words: readonly string[]): string =>
  words.map((word) => `${column} ILIKE $${bind.push(containing(word))}`).join(' AND ');

/** Names that begin with what was typed stand first, then the newest. */
const order = (name: string, made: string) => `(lower(${name}) LIKE lower($2) || '%') DESC, ${made} DESC`;

/**
 * Campaigns, runs and recordings of a laboratory by name, tags or notes of the run, and its people by name. A
 * recording is found by the name of its run too, so that words of several levels can be typed together.
 */
export async function searchLab(labId: string, q: string): Promise<SearchView> {
  const words = q.split(/\s+/).filter(Boolean).slice(0, 8);
  const find = async <T extends object>(
    sql: (matches: (column: string) => string) => string,
  ): Promise<T[]> => {
    const bind: unknown[] = [labId, q.replace(/[\\%_]/g, '\\$&')];
    const text = sql((column) => holds(column, bind, words));
    return selectRows<T>(`${text} LIMIT ${FOUND_MOST + 1}`, bind);
  };
  const live = 'r.deleted_at IS NULL AND c.deleted_at IS NULL AND NOT c.rehearsal';
  const [campaigns, runs, recordings, people] = await Promise.all([
    find<SearchView['campaigns'][number]>(
      (matches) => `SELECT c.id, c.name,
        (SELECT count(*)::int FROM runs r WHERE r.campaign_id = c.id AND r.deleted_at IS NULL) AS runs
       FROM campaigns c WHERE c.lab_id = $1 AND c.deleted_at IS NULL AND NOT c.rehearsal
         AND ${matches("(c.name || ' ' || array_to_string(c.tags, ' '))")}
       ORDER BY ${order('c.name', 'c.created_at')}, c.id`,
    ),
    find<SearchView['runs'][number]>(
      (
        matches,
      ) => `SELECT r.id, r.name, c.name AS "campaignName" FROM runs r JOIN campaigns c ON c.id = r.campaign_id
       WHERE r.lab_id = $1 AND ${live}
         AND ${matches("(r.name || ' ' || c.name || ' ' || array_to_string(r.tags, ' ') || ' ' || coalesce(r.notes, ''))")}
       ORDER BY ${order('r.name', 'r.created_at')}, r.id`,
    ),
    find<SearchView['recordings'][number]>(
      (matches) => `SELECT g.id, g.name, g.state, r.name AS "runName", c.name AS "campaignName"
       FROM recordings g JOIN runs r ON r.id = g.run_id JOIN campaigns c ON c.id = r.campaign_id
       WHERE g.lab_id = $1 AND g.deleted_at IS NULL AND ${live}
         AND ${matches("(g.name || ' ' || r.name || ' ' || coalesce(g.sha256, ''))")}
       ORDER BY ${order('g.name', 'g.created_at')}, g.id`,
    ),
    find<SearchView['people'][number]>(
      (matches) => `SELECT m.id, u.name, m.roles FROM memberships m JOIN users u ON u.id = m.user_id
       WHERE m.lab_id = $1 AND ${matches('u.name')} ORDER BY ${order('u.name', 'm.created_at')}, m.id`,
    ),
  ]);
  const lists = [campaigns, runs, recordings, people];
  return {
    campaigns: campaigns.slice(0, FOUND_MOST),
    runs: runs.slice(0, FOUND_MOST),
    recordings: recordings.slice(0, FOUND_MOST),
    people: people.slice(0, FOUND_MOST),
    more: lists.some((list) => list.length > FOUND_MOST),
  };
}
