import type { Grid } from '../takes/take-set.ts';

/** Fractions of an octave that `--grid` offers. */
const FRACTIONS = [3, 6, 12, 24];
/** Finest grid by decade; beyond it a spectrum is only drawn out, since no bench resolves it (common practice, no source). */
const MOST_POINTS = 10_000;

/** Reads `1/12`, `DECADE/50` or `as-measured`; undefined for anything else. */
export function parseGrid(text: string): Grid | undefined {
  if (text === 'as-measured') return { kind: 'as measured' };
  const parts = /^(1|decade)\/(\d{1,5})$/i.exec(text);
  if (parts === null) return undefined;
  const number = Number(parts[2]);
  if (parts[1] === '1') return FRACTIONS.includes(number) ? { kind: 'octave bands', fraction: number } : undefined;
  return number >= 1 && number <= MOST_POINTS ? { kind: 'per decade', points: number } : undefined;
}
