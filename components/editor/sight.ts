import { centreOn, toImage, toScreen, type Point } from '@/components/canvas/view-box';
import * as acts from './edit-actions';
import type { EditContext } from './edit-context';

/** What is seen of the picture: where it is, how bright, and what is drawn over it. */
export class Sight {
  constructor(private readonly context: EditContext) {}

  toggle(name: 'ghosts' | 'magnifier', words: string): void {
    const { state } = this.context.session;
    const on = !state.get()[name];
    state.set({ [name]: on });
    state.say(`${words}: ${on ? 'on' : 'off'}.`);
  }

  turnBrightness(): void {
    const { session, viewer } = this.context;
    const brightness = viewer.get().brightness === 'log' ? 'linear' : 'log';
    viewer.set({ brightness });
    session.state.say(`Brightness is shown ${brightness === 'log' ? 'on a logarithmic scale' : 'as it is'}.`);
  }

  /** Middle of what is in sight, px of the image. */
  middle(): Point {
    const { view, well } = this.context.viewer.get();
    if (!view || !well) return { x: 0, y: 0 };
    return toImage(view, { x: well.width / 2, y: well.height / 2 });
  }

  /** Moves the picture only where the track would be out of it. */
  keepInSight(track: number): void {
    const { session, viewer, image } = this.context;
    const { view, well, shown } = viewer.get();
    const shownTrack = session.track(track);
    const place = shownTrack && acts.placeIn(shownTrack, shown);
    if (!view || !well || !place) return;
    const at = toScreen(view, place);
    if (at.x >= 0 && at.y >= 0 && at.x <= well.width && at.y <= well.height) return;
    viewer.set({ view: centreOn(view, place, image, well) });
  }

  /** Brings a track into sight once its frame is there. */
  bringWhenShown(track: number): void {
    const { viewer } = this.context;
    const look = () => {
      const { frame, shown, chosenTrack } = viewer.get();
      if (frame !== shown && chosenTrack === track) return;
      stop();
      if (chosenTrack === track) this.keepInSight(track);
    };
    const stop = viewer.subscribe(look);
    look();
  }
}
