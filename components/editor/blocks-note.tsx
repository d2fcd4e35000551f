'use client';

import { useViewer } from '@/components/canvas/use-viewer';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { Button } from '@/components/ui/button';
import type { EditSession } from './edit-session';
import { useEdit } from './use-edit';

/** Says on the picture when the tracks of the frame are not here. */
export function BlocksNote({ session, viewer }: { session: EditSession; viewer: ViewerStore }) {
  const frame = useViewer(viewer, (state) => state.frame);
  useEdit(session.state, (state) => state.version);
  const source = session.blocks;
  if (source?.at(frame)) return null;
  const failure = source?.failure(frame);
  if (!failure) {
    return (
      <p className="loading-bars pointer-events-none absolute right-2 top-2 bg-well/72 px-[6px] py-px text-small text-well-text">
        tracks are on their way
      </p>
    );
  }
  return (
    <p
      role="alert"
      className="absolute inset-x-0 top-8 flex flex-wrap items-center gap-3 bg-well/85 px-2 py-1 text-note text-well-text"
    >
      The tracks of these frames could not be had. {failure.message}
      <Button
        className="border-well-text! text-well-text! hover:bg-well-mid!"
        onClick={() => source?.retry(frame)}
      >
        Try again
      </Button>
    </p>
  );
}
