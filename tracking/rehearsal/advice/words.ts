/** Numbers inside sentences: two digits, no more than advice deserves. */
export function about(value: number): string {
  if (value === 0 || !Number.isFinite(value)) return String(value);
  const rounded = Number(value.toPrecision(2));
  return String(rounded);
}

export const percent = (share: number): string => {
  const value = 100 * share;
  return `${value >= 10 || value === 0 ? Math.round(value) : Number(value.toPrecision(1))} %`;
};

/** Three digits: lengths are compared with each other. */
export const micrometres = (metres: number): string => `${Number((metres * 1e6).toPrecision(3))} µm`;
export const milliseconds = (seconds: number): string => `${about(seconds * 1e3)} ms`;
