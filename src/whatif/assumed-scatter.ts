import type { LadderStep, ScatterStep } from '../estimate/scatter-step.ts';
import type { FrequencyRange } from '../quantity/frequency.ts';

/** The ladder of scatter that a prediction rests on, in one stretch of frequencies. Standard deviations of a pair, in dB. */
export interface AssumedBand {
  /** Hertz; NaN where one ladder serves all frequencies. */
  readonly from: number;
  readonly to: number;
  readonly repeat: number;
  readonly reseat: number;
  readonly partner: number;
  /** Steps that nobody gave and no run showed, so that a default stands for them. */
  readonly assumed: readonly LadderStep[];
}

export type Ladder = Readonly<Record<LadderStep, number>>;

export const LADDER_STEPS: readonly LadderStep[] = ['repeat', 'reseat', 'partner'];

/** What a contact transducer on a bench may show, in dB, where nobody knows better. Common practice, no source. */
const DEFAULT_LADDER: Ladder = { repeat: 0.1, reseat: 0.5, partner: 0.3 };

/** A figure for all frequencies, or figures band by band. */
export type StepFigure = number | readonly { readonly from: number; readonly to: number; readonly value: number }[];

/** Stretches of frequency that not every step has a figure for. */
export interface MissingFigure {
  readonly step: LadderStep;
  readonly from: number;
  readonly to: number;
}

/**
 * Brings figures of the three steps together: bands that at least one step is given in, cut where any of them changes.
 * @returns the bands, and where a step that is given band by band has no figure in one of them.
 */
export function assumedBands(given: Partial<Record<LadderStep, StepFigure>>): {
  readonly bands: readonly AssumedBand[];
  readonly missing: readonly MissingFigure[];
} {
  const assumed = LADDER_STEPS.filter((step) => given[step] === undefined);
  const figures = LADDER_STEPS.map((step) => given[step] ?? DEFAULT_LADDER[step]);
  const stretches = figures.flatMap((figure) => (typeof figure === 'number' ? [] : figure));
  const bandOf = (from: number, to: number, [repeat, reseat, partner]: readonly number[]): AssumedBand => ({
    from,
    to,
    repeat: repeat!,
    reseat: reseat!,
    partner: partner!,
    assumed,
  });
  if (stretches.length === 0) return { bands: [bandOf(Number.NaN, Number.NaN, figures as number[])], missing: [] };
  const edges = [...new Set(stretches.flatMap(({ from, to }) => [from, to]))].sort((a, b) => a - b);
  const missing: MissingFigure[] = [];
  const bands: AssumedBand[] = [];
  for (const [i, from] of edges.slice(0, -1).entries()) {
    const to = edges[i + 1]!;
    const inside = ({ from: low, to: high }: { from: number; to: number }) => low <= from && to <= high;
    if (!stretches.some(inside)) continue;
    const values = figures.map((figure, s) => {
      if (typeof figure === 'number') return figure;
      const found = figure.find(inside);
      if (found === undefined) missing.push({ step: LADDER_STEPS[s]!, from, to });
      return found?.value ?? Number.NaN;
    });
    bands.push(bandOf(from, to, values));
  }
  return { bands, missing };
}

/**
 * The ladder that a run showed, third-octave by third-octave. A figure that the user gives wins. A step that the run could
 * not show, or that has another step in it, takes the median of the bands that showed it, else the default; both are
 * marked as assumed.
 * @param within bands with their middle in this range are wanted; all where absent.
 */
export function shownBands(
  scatter: readonly ScatterStep[],
  given: Partial<Record<LadderStep, StepFigure>>,
  within?: FrequencyRange,
): readonly AssumedBand[] {
  const typical = (step: LadderStep) => {
    const shown = scatter.map((band) => band[step].sd).filter((sd) => !Number.isNaN(sd));
    return shown.length === 0 ? DEFAULT_LADDER[step] : shown.sort((a, b) => a - b)[shown.length >> 1]!;
  };
  const instead = { repeat: typical('repeat'), reseat: typical('reseat'), partner: typical('partner') };
  const wanted = scatter.filter(({ from, to }) => {
    const middle = Math.sqrt(from * to);
    return within === undefined || (within.from <= middle && middle <= within.to);
  });
  return wanted.map((band) => {
    const assumed: LadderStep[] = [];
    const figure = (step: LadderStep): number => {
      const own = given[step];
      if (typeof own === 'number') return own;
      const middle = Math.sqrt(band.from * band.to);
      const typed = own?.find(({ from, to }) => from <= middle && middle <= to);
      if (typed !== undefined) return typed.value;
      if (!Number.isNaN(band[step].sd)) return band[step].sd;
      assumed.push(step);
      return instead[step];
    };
    const [repeat, reseat, partner] = LADDER_STEPS.map(figure) as [number, number, number];
    return { from: band.from, to: band.to, repeat, reseat, partner, assumed };
  });
}
