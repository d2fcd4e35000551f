'use client';

import { signOut } from 'next-auth/react';
import { useRouter } from 'next/navigation';
import { useState, useTransition } from 'react';
import { Menu, type MenuItem } from '@/components/ui/menu';
import type { Theme } from '@/lib/theme';
import type { Place } from './places';
import { applyTheme, currentTheme } from './theme-choice';

export interface Viewer {
  name: string;
  /** Address of the account page; left out where there is none. */
  accountHref?: string;
  /** Laboratories of this person; the switch shows from two on. */
  labs: readonly { id: string; name: string; current: boolean }[];
}

interface UserMenuProps {
  viewer: Viewer;
  /** Makes a laboratory the current one; the page is then drawn anew. */
  switchLab?: (labId: string) => Promise<void>;
  /** Places to list first, where the head has no room for them. */
  places?: readonly Place[];
  current?: Place | null;
  button: string;
}

const THEMES: readonly [Theme, string][] = [
  ['light', 'Paper'],
  ['dark', 'Dark room'],
  ['system', 'As this computer'],
];

/** Account, laboratory, theme, sign out; on narrow screens the places too. */
export function UserMenu({ viewer, switchLab, places = [], current = null, button }: UserMenuProps) {
  const router = useRouter();
  const [, startTransition] = useTransition();
  const [theme, setTheme] = useState<Theme | null>(null);
  const choose = (next: Theme) => {
    applyTheme(next);
    setTheme(next);
  };
  const shownTheme = theme ?? (typeof document === 'undefined' ? 'system' : currentTheme());

  const items: MenuItem[] = places.map((place) => ({
    kind: 'link',
    label: place.label,
    href: place.href,
    note: place.count ? String(place.count) : undefined,
    current: place === current,
  }));
  if (places.length > 0) items.push({ kind: 'heading', label: viewer.name });
  if (viewer.accountHref) items.push({ kind: 'link', label: 'Account', href: viewer.accountHref });
  if (switchLab && viewer.labs.length > 1) {
    items.push({ kind: 'heading', label: 'Laboratory' });
    for (const lab of viewer.labs) {
      items.push({
        kind: 'act',
        label: lab.name,
        current: lab.current,
        onSelect: () =>
          startTransition(async () => {
            await switchLab(lab.id);
            router.push('/');
            router.refresh();
          }),
      });
    }
  }
  items.push({ kind: 'heading', label: 'Theme' });
  for (const [value, label] of THEMES) {
    items.push({ kind: 'act', label, current: value === shownTheme, onSelect: () => choose(value) });
  }
  items.push({ kind: 'heading', label: 'Session' });
  items.push({ kind: 'act', label: 'Sign out', onSelect: () => void signOut({ callbackUrl: '/sign-in' }) });

  return <Menu button={button} label={`Menu of ${viewer.name}`} items={items} align="right" />;
}
