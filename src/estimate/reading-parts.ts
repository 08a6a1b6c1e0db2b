import type { Model } from '../model/model.ts';
import { noiseLevelPart } from '../takes/subtract-noise.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { LevelScatter } from './scatter-of-level.ts';
import { withSeatingLinks } from './shared-seatings.ts';
import type { CovarianceBlock, ReadingUncertainty, Solution } from './solution.ts';

/** A variance in dB², with the sum of squares that multiplies the variance of a single draw. */
export interface Part {
  variance: number;
  squares: number;
}

/** What the readings bring to the variance of a link's estimate at one frequency. */
export interface ReadingParts {
  /** Readings by themselves, but for the next two. */
  readonly own: Part;
  /** What taking background noise off the levels brings. */
  readonly noise: Part;
  /** What the digits that levels are written with bring; it is in what repeats or the input's own figure say. */
  readonly rounding: Part;
  /** Seatings and partners. */
  readonly seat: Part;
  readonly partner: Part;
  /** The same by the response link that the share belongs to, in dB². */
  readonly seatOf: Float64Array;
  readonly partnerOf: Float64Array;
}

/** Where the variance of readings comes from, for the frequencies of one block of the covariance. */
export type PartsAt = (link: number, f: number) => ReadingParts;

/**
 * Splits the variance that readings bring to a link's estimate. The estimate is Σ g y over the readings, so that its
 * variance is Σ g² of each reading's own, plus (Σ g over a seating)² of the seating's, plus (Σ g over a chain)² of the
 * partner's; seatings that are links of their own bring the square of what their prior value weighs.
 * Source: JCGM 100:2008, 5.2.2 and F.1.2 (common contributions).
 * @param set as it was solved: levels of takes that were left out are passed over.
 */
export function readingParts(set: TakeSet, model: Model, solution: Solution): (block: CovarianceBlock) => PartsAt {
  const { scatter, readingUncertainty: reading } = solution;
  const count = scatter?.shared.seatings.length ?? 0;
  const wider =
    scatter !== undefined && count > 0 ? withSeatingLinks(model, scatter.shared, scatter.sharedDeviation) : model;
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const rows = wider.linksPerFrequency;
  const source = scatter?.readingSource ?? reading.source;
  const single = scatter?.single ?? reading.values;
  const weigher = reading.independent ?? reading.values;
  return (block) => {
    const matrix = block.wide ?? block.matrix;
    const at = block.frequencies.findIndex((_, k) => !Number.isNaN(block.scales[k]!));
    const first = block.frequencies[at] ?? block.frequencies[0]!;
    const takes = [...set.takes.keys()].filter((t) => !Number.isNaN(solution.redundancy[t * width + first]!));
    const weights = takes.map((t) => (block.scales[at] ?? Number.NaN) / weigher[t * width + first]! ** 2);
    const scaleAt = new Map(block.frequencies.map((f, k) => [f, block.scales[k]!]));
    const known = new Map<number, Contributions>();
    return (link, f) => {
      let own = known.get(link);
      if (own === undefined) {
        const row = matrix.subarray(link * rows, (link + 1) * rows);
        own = contributionsOf(readingGains(wider, takes, weights, row, rows), scatter, takes, n);
        known.set(link, own);
      }
      const parts = emptyParts(n);
      const { gains } = own;
      takes.forEach((t, r) => {
        addReading(parts, gains[r]!, set, t * width + f, single, source);
      });
      const level = scatter?.levelOf[f];
      if (level !== undefined) addScatter(parts, own, level);
      for (let s = 0; s < count; s++) {
        const pull = scaleAt.get(f)! * matrix[link * rows + n + s]!;
        const deviation = scatter!.sharedDeviation[f * count + s]!;
        const square = (pull / deviation ** 2) ** 2;
        const { response } = scatter!.shared.seatings[s]!;
        parts.seat.squares += square;
        parts.seat.variance += square * deviation ** 2;
        parts.seatOf[response] = parts.seatOf[response]! + square * deviation ** 2;
      }
      return parts;
    };
  };
}

interface Contributions {
  /** Weight of each take's reading in the estimate. */
  readonly gains: Float64Array;
  /** Σ over seatings and chains of squared weights, by the response link whose share they carry. */
  readonly seat: Float64Array;
  readonly partner: Float64Array;
}

function readingGains(
  { chains }: Model,
  takes: readonly number[],
  weights: readonly number[],
  row: Float64Array,
  rows: number,
): Float64Array {
  return Float64Array.from(takes, (t, r) => {
    const { links, factors } = chains[t]!;
    let sum = 0;
    links.forEach((link, k) => {
      if (link < rows) sum += row[link]! * factors[k]!;
    });
    return sum * weights[r]!;
  });
}

function contributionsOf(
  gains: Float64Array,
  scatter: Solution['scatter'],
  takes: readonly number[],
  n: number,
): Contributions {
  const [seat, partner] = [new Float64Array(n), new Float64Array(n)];
  if (scatter === undefined) return { gains, seat, partner };
  const { layout, shared } = scatter;
  const seats = new Float64Array(layout.takes.length);
  const chains = new Float64Array(layout.groups.length);
  takes.forEach((t, r) => {
    const seating = layout.seatOf[t]!;
    const chain = layout.chainOfSeat[seating]!;
    seats[seating] = seats[seating]! + gains[r]!;
    chains[chain] = chains[chain]! + gains[r]!;
  });
  seats.forEach((sum, seating) => {
    for (const end of shared.ownEnds[seating]!) seat[end] = seat[end]! + sum * sum;
  });
  chains.forEach((sum, chain) => {
    for (const end of layout.groups[chain]!.ends) partner[end] = partner[end]! + sum * sum;
  });
  return { gains, seat, partner };
}

function emptyParts(n: number): ReadingParts {
  const part = () => ({ variance: 0, squares: 0 });
  return {
    own: part(),
    noise: part(),
    rounding: part(),
    seat: part(),
    partner: part(),
    seatOf: new Float64Array(n),
    partnerOf: new Float64Array(n),
  };
}

function addReading(
  { own, noise, rounding }: ReadingParts,
  gain: number,
  set: TakeSet,
  cell: number,
  single: Float64Array,
  source: ReadingUncertainty['source'],
): void {
  if (gain === 0) return;
  const square = gain * gain;
  const variance = single[cell]! ** 2;
  const clean = variance / noiseFactorOf(set, cell, source) ** 2;
  const written = source === 'averages' ? 0 : Math.min(clean, (set.resolution ?? 0) ** 2 / 12);
  own.variance += square * (clean - written);
  own.squares += square;
  if (clean < variance) {
    noise.variance += square * (variance - clean);
    noise.squares += square;
  }
  if (written > 0) {
    rounding.variance += square * written;
    rounding.squares += square;
  }
}

/** By how much noise multiplies the uncertainty of a reading that has it from this source. */
function noiseFactorOf({ noiseFactor }: TakeSet, cell: number, source: ReadingUncertainty['source']): number {
  if (noiseFactor === undefined || source === 'residuals' || source === 'none') return 1;
  return source === 'repeats' ? Math.hypot(1, noiseLevelPart(noiseFactor[cell]!)) : noiseFactor[cell]!;
}

function addScatter(parts: ReadingParts, own: Contributions, { seating, partner }: LevelScatter): void {
  const add = (total: Part, byEnd: Float64Array, squares: Float64Array, shares: Float64Array | undefined): void => {
    if (shares === undefined) return;
    squares.forEach((square, end) => {
      const variance = square * shares[end]!;
      total.squares += square;
      total.variance += variance;
      byEnd[end] = byEnd[end]! + variance;
    });
  };
  add(parts.seat, parts.seatOf, own.seat, seating?.shares);
  add(parts.partner, parts.partnerOf, own.partner, partner?.shares);
}
