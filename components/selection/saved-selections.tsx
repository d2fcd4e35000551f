'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { Button } from '@/components/ui/button';
import { ConfirmDialog, Dialog } from '@/components/ui/dialog';
import { Field } from '@/components/ui/field';
import { Menu, type MenuItem } from '@/components/ui/menu';
import { selectionWords } from '@/lib/compare/selection-words';
import type { SavedSelectionView } from '@/lib/views/compare-view';
import { SAVED_KEY, useSavedSelections } from './use-saved-selections';
import type { SelectionState } from './use-selection';

interface SavedSelectionsProps {
  selection: SelectionState;
  viewer: { id: string; mayEditAll: boolean };
}

/** The laboratory's kept selections: take one, keep the present one, remove one's own. */
export function SavedSelections({ selection, viewer }: SavedSelectionsProps) {
  const client = useQueryClient();
  const { data } = useSavedSelections();
  const [saving, setSaving] = useState(false);
  const [removing, setRemoving] = useState<SavedSelectionView | null>(null);
  const saved = data?.items ?? [];
  const same = (filters: Readonly<Record<string, string>>) => selectionKey(filters) === selectionKey(selection.filters); // prettier-ignore
  const current = saved.find(({ filters }) => same(filters));
  const removable = current && (viewer.mayEditAll || current.createdBy?.id === viewer.id) ? current : null;
  const items: MenuItem[] = [
    ...(saved.length > 0 ? [{ kind: 'heading' as const, label: 'Saved in this laboratory' }] : []),
    ...saved.map((one): MenuItem => ({ kind: 'act', label: one.name, note: one.createdBy?.name, current: one === current, onSelect: () => selection.replace(one.filters) })), // prettier-ignore
    { kind: 'heading', label: 'The present selection' },
    { kind: 'act', label: 'Save as …', onSelect: () => setSaving(true) },
    ...(removable ? [{ kind: 'act' as const, label: `Remove “${removable.name}”`, onSelect: () => setRemoving(removable) }] : []), // prettier-ignore
    ...(Object.keys(selection.filters).length > 0 ? [{ kind: 'act' as const, label: 'Select everything', onSelect: () => selection.replace({}) }] : []), // prettier-ignore
  ];
  return (
    <>
      <Menu
        label="Saved selections"
        button={current ? current.name : 'Saved selections'}
        items={items}
        align="right"
        className="text-note"
      />
      {saving ? <SaveDialog selection={selection} onClose={() => setSaving(false)} /> : null}
      <ConfirmDialog
        open={removing !== null}
        onClose={() => setRemoving(null)}
        question={`Remove the selection “${removing?.name ?? ''}”?`}
        keep="Keep it"
        act="Remove it"
        onAct={async () => {
          await api(`/api/v1/selections/${removing!.id}`, { method: 'DELETE' });
          await client.invalidateQueries({ queryKey: SAVED_KEY });
        }}
      >
        Runs and analyses stay as they are; only the kept choice goes.
      </ConfirmDialog>
    </>
  );
}

const selectionKey = (filters: Readonly<Record<string, string>>) =>
  JSON.stringify(Object.entries(filters).sort(([a], [b]) => (a < b ? -1 : 1)));

function SaveDialog({ selection, onClose }: { selection: SelectionState; onClose: () => void }) {
  const client = useQueryClient();
  const [name, setName] = useState('');
  const { busy, problem, act } = useAct();
  async function save() {
    await api('/api/v1/selections', {
      method: 'POST',
      idempotencyKey: crypto.randomUUID(),
      body: { name, filters: selection.filters },
    });
    await client.invalidateQueries({ queryKey: SAVED_KEY });
    onClose();
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title="Save this selection"
      actions={
        <>
          <Button onClick={onClose}>Don’t save</Button>
          <Button kind="main" busy={busy !== null} onClick={() => void act(save)}>
            Save
          </Button>
        </>
      }
    >
      <p className="pb-2 text-ink-2">
        {selectionWords(selection.filters)}. Runs that fit later belong to it as well.
      </p>
      <Field
        label="Name"
        value={name}
        autoFocus
        error={problem ?? undefined}
        onChange={({ target }) => setName(target.value)}
        onKeyDown={({ key }) => {
          if (key === 'Enter') void act(save);
        }}
      />
    </Dialog>
  );
}
