import type { BeadState } from '@/components/ui/state-bead';
import type { MailItemView } from '@/lib/views/mail-view';

/** Where a mail stands, as glyph and words. */
export function mailState({ state, trouble }: Pick<MailItemView, 'state' | 'trouble'>): {
  bead: BeadState;
  words: string;
} {
  switch (state) {
    case 'waiting':
      return trouble ? { bead: 'stale', words: 'delayed' } : { bead: 'waiting', words: 'on its way' };
    case 'sent':
      return { bead: 'done', words: 'sent' };
    case 'kept':
      return { bead: 'done', words: 'kept here' };
    case 'dropped':
      return { bead: 'stopped', words: 'not needed any more' };
    case 'failed':
      return { bead: 'failed', words: 'not delivered' };
  }
}
