'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import Link from 'next/link';
import type { ReactNode } from 'react';
import { api } from '@/components/data/api-client';
import { Answer } from '@/components/data/answer';
import { SearchField } from '@/components/lists/search-field';
import { useAddress } from '@/components/lists/use-address';
import { EmptyState } from '@/components/ui/page-states';
import { PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { ROLE_NAMES, type Role } from '@/lib/access';
import { countOf } from '@/lib/format/count';
import type { SearchView } from '@/lib/views/search-view';

/** Campaigns, runs, recordings and people of the laboratory by words of their names. */
export function SearchSheet() {
  const { path, shown, change } = useAddress();
  const q = shown.get('q')?.trim() ?? '';
  const address = `/api/v1/search?${new URLSearchParams({ q })}`;
  const query = useQuery({
    queryKey: ['search', q],
    queryFn: ({ signal }) => api<SearchView>(address, { signal }),
    enabled: q !== '',
    placeholderData: keepPreviousData,
  });
  return (
    <Sheet>
      <PageTitle>Search</PageTitle>
      <search className="block max-w-[420px] pb-3">
        <SearchField
          label="Campaigns, runs, recordings, people"
          value={q}
          onSearch={(text) => change(() => (text ? `${path}?${new URLSearchParams({ q: text })}` : path))}
        />
      </search>
      {q === '' ? (
        <EmptyState>
          Type words of a name, a tag or a note; several words narrow it. The first part of a SHA-256 finds
          its recording.
        </EmptyState>
      ) : (
        <Answer query={query} what="what was found">
          {(found) => <Found found={found} q={q} />}
        </Answer>
      )}
    </Sheet>
  );
}

function Found({ found, q }: { found: SearchView; q: string }) {
  const { campaigns, runs, recordings, people, more } = found;
  const total = campaigns.length + runs.length + recordings.length + people.length;
  return (
    <div className="max-w-[84ch]">
      <p role="status" className="pb-2 text-note text-ink-2">
        {total === 0
          ? `Nothing holds “${q}”.`
          : `${countOf(total, 'thing')} found${more ? '; there are more, add a word' : ''}.`}
      </p>
      <Group
        title="Campaigns"
        rows={campaigns.map(({ id, name, runs: count }) => ({
          id,
          name,
          href: `/campaigns/${id}`,
          note: countOf(count, 'run'),
        }))}
      />{' '}
      {/* prettier-ignore */}
      <Group title="Runs" rows={runs.map(({ id, name, campaignName }) => ({ id, name, href: `/runs/${id}`, note: campaignName }))} />{' '}
      {/* prettier-ignore */}
      <Group title="Recordings" rows={recordings.map(({ id, name, runName, campaignName, state }) => ({ id, name, href: `/recordings/${id}`, note: `${campaignName}, ${runName}${state === 'ready' ? '' : `, ${state}`}` }))} />{' '}
      {/* prettier-ignore */}
      <Group title="People" rows={people.map(({ id, name, roles }) => ({ id, name, href: null, note: roles.map((role) => ROLE_NAMES[role as Role] ?? role).join(', ') }))} />{' '}
      {/* prettier-ignore */}
    </div>
  );
}

interface FoundRow {
  id: string;
  name: ReactNode;
  href: string | null;
  note: string;
}

function Group({ title, rows }: { title: string; rows: readonly FoundRow[] }) {
  if (rows.length === 0) return null;
  return (
    <Section title={title} count={String(rows.length)}>
      <ul>
        {rows.map(({ id, name, href, note }) => (
          <li key={id} className="flex flex-wrap items-baseline gap-x-3 border-b border-line py-[5px]">
            <span className="[overflow-wrap:anywhere]">{href ? <Link href={href}>{name}</Link> : name}</span>
            <span className="text-small text-ink-2">{note}</span>
          </li>
        ))}
      </ul>
    </Section>
  );
}
