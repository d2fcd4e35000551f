/** Colours of figures on white paper, those of the light theme. */
export const PAPER = {
  ink: '#1B2226',
  quiet: '#4E5A5F',
  grid: '#D9E0DE',
  trapped: '#B97A14',
  free: '#2F8577',
  undecided: '#2B353B',
  white: '#FFFFFF',
} as const;

/** Text and lines of figures, points: 8 pt text and 7 pt numbers stay readable at one column. */
export const SIZES = { text: 8, ticks: 7, axis: 0.6, grid: 0.4, tick: 3, minorTick: 1.8 } as const;

/** Strokes of the populations, as everywhere: beaded, plain, dashed. */
export const POPULATION_STROKES = {
  trapped: { colour: PAPER.trapped, widthPt: 0.7, beadPt: 1.5, dash: undefined },
  free: { colour: PAPER.free, widthPt: 1.6, beadPt: 0, dash: undefined },
  undecided: { colour: PAPER.undecided, widthPt: 0.9, beadPt: 0, dash: [3.2, 2.6] },
  all: { colour: PAPER.ink, widthPt: 0.9, beadPt: 0, dash: undefined },
} as const;
