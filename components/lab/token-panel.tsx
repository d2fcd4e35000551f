'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { useList } from '@/components/lists/use-list';
import { Button } from '@/components/ui/button';
import { Checkbox } from '@/components/ui/choice';
import { ConfirmDialog, Dialog } from '@/components/ui/dialog';
import { Field } from '@/components/ui/field';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import type { Scope } from '@/lib/access';
import type { ListShape } from '@/lib/lists/list-state';
import type { TokenView } from '@/lib/views/lab-view';

const SHAPE: ListShape = { sorts: ['createdAt', 'name'], defaultSort: '-createdAt', filters: [] };
const SCOPE_WORDS: Record<Scope, string> = {
  read: 'read what the laboratory has',
  write: 'create, upload, start analyses',
  review: 'judge and correct',
  export: 'download tables',
};

/** API tokens: made here, shown once, revoked for good. */
export function TokenPanel({ scopes }: { scopes: readonly Scope[] }) {
  const client = useQueryClient();
  const list = useList<TokenView>('/api/v1/tokens', SHAPE);
  const [making, setMaking] = useState(false);
  const [revoking, setRevoking] = useState<TokenView | null>(null);
  const refresh = () => client.invalidateQueries({ queryKey: ['list'] });
  return (
    <>
      <Answer query={list.query} what="the tokens">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState action={<Button onClick={() => setMaking(true)}>New token</Button>}>
              No tokens. A token lets a script do what you may do.
            </EmptyState>
          ) : (
            <>
              <Table label="Tokens">
                <thead>
                  <tr>
                    <HeadCell sort={list.sort('name')}>Token</HeadCell>
                    <HeadCell narrow="hide">Owner</HeadCell>
                    <HeadCell narrow="hide">May</HeadCell>
                    <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                      Made
                    </HeadCell>
                    <HeadCell narrow="hide">Last used</HeadCell>
                    <HeadCell>State</HeadCell>
                  </tr>
                </thead>
                <tbody>
                  {items.map((token) => (
                    <Row key={token.id}>
                      <Cell head>
                        {token.name}
                        <code className="block text-small text-ink-3">{token.hint}…</code>
                      </Cell>
                      <Cell narrow="hide">{token.owner.name}</Cell>
                      <Cell quiet narrow="hide">
                        {token.scopes.join(', ')}
                      </Cell>
                      <Cell quiet narrow="hide">
                        <Moment at={token.createdAt} />
                      </Cell>
                      <Cell quiet narrow="hide">
                        {token.lastUsedAt ? <Moment at={token.lastUsedAt} /> : 'never'}
                      </Cell>
                      <Cell>
                        {token.revokedAt ? (
                          <StateWord state="stopped">revoked</StateWord>
                        ) : (
                          <Button onClick={() => setRevoking(token)}>Revoke</Button>
                        )}
                      </Cell>
                    </Row>
                  ))}
                </tbody>
              </Table>
              <div className="pt-3">
                <Button kind="main" onClick={() => setMaking(true)}>
                  New token
                </Button>
              </div>
            </>
          )
        }
      </Answer>
      <Pager label="tokens" backHref={list.backHref} nextHref={list.nextHref} />
      {making ? <TokenDialog scopes={scopes} onClose={() => setMaking(false)} onMade={refresh} /> : null}
      <ConfirmDialog
        open={revoking !== null}
        onClose={() => setRevoking(null)}
        question={`Revoke “${revoking?.name ?? ''}”?`}
        keep="Keep it"
        act="Revoke it"
        onAct={async () => {
          await api(`/api/v1/tokens/${revoking!.id}`, { method: 'DELETE' });
          await refresh();
        }}
      >
        Scripts that use it are refused from now on. What they did stays. This can&rsquo;t be taken back.
      </ConfirmDialog>
    </>
  );
}

interface TokenDialogProps {
  scopes: readonly Scope[];
  onClose: () => void;
  onMade: () => void;
}

function TokenDialog({ scopes, onClose, onMade }: TokenDialogProps) {
  const [name, setName] = useState('');
  const [chosen, setChosen] = useState<readonly Scope[]>(scopes);
  const [token, setToken] = useState<string | null>(null);
  const { busy, problem, act } = useAct();
  async function make() {
    const body = { name, scopes: chosen };
    const made = await api<{ token: string }>('/api/v1/tokens', { method: 'POST', body });
    setToken(made.token);
    onMade();
  }
  if (token) {
    return (
      <Dialog
        open
        onClose={onClose}
        title="Your new token"
        actions={
          <>
            <Button onClick={() => void navigator.clipboard.writeText(token)}>Copy</Button>
            <Button kind="main" onClick={onClose}>
              I have kept it
            </Button>
          </>
        }
      >
        <p>It is shown this once and kept nowhere.</p>
        <code className="mt-2 block break-all bg-sunk p-2" data-testid="new-token">
          {token}
        </code>
      </Dialog>
    );
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title="New token"
      actions={
        <>
          <Button kind="bare" onClick={onClose}>
            Leave it
          </Button>
          <Button
            kind="main"
            busy={busy !== null}
            reason={chosen.length === 0 ? 'Choose what it may do.' : null}
            onClick={() => void act(make)}
          >
            Make token
          </Button>
        </>
      }
    >
      <div className="flex flex-col gap-3 pt-2">
        <Field
          label="Name"
          help="Where it will be used"
          value={name}
          onChange={(event) => setName(event.target.value)}
          autoFocus
        />
        <fieldset>
          <legend className="pb-1 text-small text-ink-2">It may</legend>
          {scopes.map((scope) => (
            <Checkbox
              key={scope}
              label={`${scope}: ${SCOPE_WORDS[scope]}`}
              checked={chosen.includes(scope)}
              onChange={(event) =>
                setChosen(
                  event.target.checked ? [...chosen, scope] : chosen.filter((other) => other !== scope),
                )
              }
            />
          ))}
        </fieldset>
        {problem ? <ErrorState live what={problem} /> : null}
      </div>
    </Dialog>
  );
}
