import type { CorrectionView } from './views/correction-view';

const frames = (from: number, to: number) => (from === to ? `frame ${from}` : `frames ${from} to ${to}`);

/** What a correction did, after the name of who did it: "split track 12 at frame 40". @param of what an undo took back */
export function correctionWords(view: Omit<CorrectionView, 'by'>, of?: CorrectionView): string {
  const { kind, track, frame } = view;
  switch (kind) {
    case 'split':
      return `split track ${track} at frame ${frame}, the later part is track ${view.madeTrack}`;
    case 'join':
      return `joined tracks ${track} and ${view.with}`;
    case 'trim':
      return `trimmed track ${track} to ${frames(view.from ?? 0, view.to ?? 0)}`;
    case 'remove':
      return `removed track ${track}`;
    case 'add-point':
      return track === null || track === undefined
        ? `began track ${view.madeTrack} with a point in frame ${frame}`
        : `added a point to track ${track} in frame ${frame}`;
    case 'move-point':
      return `moved the point of track ${track} in frame ${frame}`;
    case 'reclass': {
      const where =
        view.from === undefined && view.to === undefined
          ? ''
          : view.to === undefined
            ? ` from frame ${view.from} on`
            : ` in ${frames(view.from ?? 0, view.to)}`;
      return `called track ${track} ${view.population}${where}`;
    }
    case 'mark-line':
      return `marked a line through ${view.points?.length ?? 0} points in frame ${frame}`;
    case 'complete-frame':
      return `called frame ${frame} complete: all its lines are marked`;
    case 'undo':
      return of
        ? `${of.kind === 'undo' ? 'put back what was taken back by' : 'took back'} correction ${of.revision}`
        : 'took back an earlier correction';
  }
}
