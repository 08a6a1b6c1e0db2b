/**
 * Colours of our own, chosen so that neighbours differ in lightness as well as in hue: they stay apart for all common kinds
 * of colour blindness and in grey. Dashes tell curves apart where colour cannot. Contrast with the ground is 3 at least
 * (WCAG 2.2, 1.4.11), which a test holds them to.
 */
export interface Theme {
  readonly ground: string;
  readonly panel: string;
  readonly ink: string;
  readonly faint: string;
  readonly rule: string;
  readonly grid: string;
  readonly accent: string;
  readonly good: string;
  readonly warning: string;
  readonly bad: string;
  /** Ground of what holds. */
  readonly sound: string;
  /** Of units, in turn. */
  readonly series: readonly string[];
  /** Grounds of stacked parts, under letters in ink. */
  readonly parts: readonly string[];
  /** Residuals above and below 0, small to large. */
  readonly above: readonly string[];
  readonly below: readonly string[];
}

export const LIGHT: Theme = {
  ground: '#ffffff',
  panel: '#f4f6f8',
  ink: '#1b2229',
  faint: '#56616c',
  rule: '#c3ccd4',
  grid: '#e3e8ec',
  accent: '#0a5aa8',
  good: '#136c43',
  warning: '#8a5a00',
  bad: '#b3261e',
  sound: '#d8ecdf',
  series: ['#0a5aa8', '#c64a0a', '#0e8a6a', '#8b3f92', '#a37b00', '#2f97cc', '#30363d'],
  parts: ['#9cc4ea', '#f6c08a', '#a9d8c6', '#d3b3d8', '#e6d28a', '#c9d0d6'],
  above: ['#f9d9b4', '#f0a95b', '#cc6a12', '#742f00'],
  below: ['#cfe2f4', '#8dbbe4', '#3b80c0', '#123a6b'],
};

export const DARK: Theme = {
  ground: '#12171c',
  panel: '#1b2229',
  ink: '#e7ecf0',
  faint: '#a5b1bc',
  rule: '#45515c',
  grid: '#29323a',
  accent: '#7db8f2',
  good: '#6fcf9d',
  warning: '#e8b949',
  bad: '#ff9a8d',
  sound: '#1f4030',
  series: ['#6aaef5', '#ff8f5a', '#48cba2', '#d99adf', '#e3b93c', '#9bdcff', '#e7ecf0'],
  parts: ['#24507d', '#7a4718', '#1d5f4c', '#5c3a63', '#5f5118', '#3d4751'],
  above: ['#4a3420', '#8a5620', '#d98a35', '#ffd9a8'],
  below: ['#1d3650', '#2c5f90', '#5a9fdb', '#c5e2ff'],
};

/** Lengths of dash and gap in pixels; the first is a full line. Their number has no divisor in common with the colours'. */
export const DASHES = ['', '9 3', '2.5 2.5', '10 3 2.5 3', '16 4', '7 2.5 2 2.5 2 2.5'] as const;

/** Classes of the n-th curve: a colour and a dash, all 42 pairs different. */
export function seriesClass(n: number): string {
  return `c${n % LIGHT.series.length} d${n % DASHES.length}`;
}
