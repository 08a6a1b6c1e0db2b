import type { Prediction } from './predict.ts';

/** Figures that designs are compared by. Uncertainties and shifts in dB, those of the worst band. */
export const FIGURES = [
  'open',
  'mean',
  'worst',
  'reseated',
  'partner',
  'difference',
  'uncheckable',
  'shift',
  'effect',
  'takes',
  'mountings',
  'minutes',
] as const;
export type Figure = (typeof FIGURES)[number];

/** One figure of all designs; the smaller, the better. NaN where a design has none. */
export interface ComparedFigure {
  readonly figure: Figure;
  readonly values: readonly number[];
  /** Whether each is the best; none where all are the same. */
  readonly isBest: readonly boolean[];
}

/** Figures closer than this part count as the same. */
const SAME = 1e-9;

/** Designs side by side. */
export function compareDesigns(predictions: readonly Prediction[]): ComparedFigure[] {
  const columns = predictions.map(figuresOf);
  return FIGURES.map((figure) => {
    const values = columns.map((column) => column[figure]);
    // A design that leaves units open has small figures for the rest: it is no winner in them.
    const eligible = values.filter((value, d) => !Number.isNaN(value) && (figure === 'open' || columns[d]!.open === 0));
    const best = Math.min(...eligible);
    const isSame = (value: number) => Math.abs(value - best) <= SAME * Math.max(1, Math.abs(best));
    const differs = values.some((value) => !isSame(value));
    return {
      figure,
      values,
      isBest: values.map((value, d) => differs && isSame(value) && (figure === 'open' || columns[d]!.open === 0)),
    };
  });
}

/** All figures of one design. */
export function figuresOf({ bands, worstBand, cost }: Prediction): Record<Figure, number> {
  const band = bands[worstBand]!;
  const told = band.units.filter(({ status }) => status !== 'open');
  const shifts = band.takes.map(({ smallestShift }) => smallestShift).filter((shift) => !Number.isNaN(shift));
  const effects = band.units.map(({ smallestEffect }) => smallestEffect).filter((effect) => !Number.isNaN(effect));
  const rms = (values: readonly number[]) =>
    values.length === 0 ? Number.NaN : Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
  return {
    open: band.units.length - told.length,
    mean: band.mean,
    worst: band.worst,
    reseated: rms(told.map(({ reseated }) => reseated)),
    partner: rms(told.map(({ otherPartner }) => otherPartner)),
    difference: band.differences.mean,
    uncheckable: band.takes.length - shifts.length,
    shift: shifts.length === 0 ? Number.NaN : Math.max(...shifts),
    effect: effects.length < band.units.length || effects.length === 0 ? Number.NaN : Math.max(...effects),
    takes: cost.takes,
    mountings: cost.mountings,
    minutes: cost.minutes,
  };
}
