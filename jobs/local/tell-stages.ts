import type { LocalStage } from './analyse-stack';

const WORDS: Record<LocalStage, string> = {
  check: 'Checking the stack',
  'measure-image': 'Measuring the image',
  'detect-spots': 'Detecting spots',
  'link-tracks': 'Linking tracks',
  'measure-flow': 'Measuring the flow',
};

/** On a terminal the share is shown as it grows; in a log a stage is one line, when it is done. */
export function stageTeller(out: NodeJS.WriteStream) {
  // Stages may overlap.
  const began = new Map<LocalStage, number>();
  let shown = '';
  const show = (text: string) => {
    if (!out.isTTY || text === shown) return;
    out.write(`\r\x1b[2K${text}`);
    shown = text;
  };
  return {
    progress(stage: LocalStage, share: number): void {
      if (share === 0) began.set(stage, performance.now());
      if (share < 1) return show(`${WORDS[stage]}: ${Math.floor(100 * share)} %`);
      // Detection itself reports 1 once more than the stage does.
      const from = began.get(stage);
      if (from === undefined) return;
      show('');
      out.write(`${WORDS[stage]}: ${((performance.now() - from) / 1000).toFixed(1)} s\n`);
      began.delete(stage);
    },
    line(text: string): void {
      show('');
      out.write(`${text}\n`);
    },
  };
}
