import { choleskyInPlace, choleskySolve } from '../numeric/cholesky.ts';
import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { fUpper } from '../numeric/f-distribution.ts';
import { hertz } from '../quantity/frequency.ts';
import { bandHolding, bandsHolding, type OctaveBand } from '../quantity/octave-bands.ts';
import type { TakeSet } from '../takes/take-set.ts';

/** How far pairs that were taken both ways differ by direction, and whether unit terms explain it. */
export interface ReciprocityFigures {
  /** F of the unit terms against what they leave; NaN where there is nothing to test with, as for the rest. */
  readonly f: number;
  readonly unitDof: number;
  readonly restDof: number;
  readonly pValue: number;
  /** Root mean square of level(a>b) − level(b>a) in dB. */
  readonly rmsDifference: number;
}

export interface ReciprocityTest {
  /** Pairs taken both ways. */
  readonly pairs: number;
  /**
   * Of these, pairs whose two directions never share a seating of both units: their means over different seatings are
   * compared, with the scatter of mountings in the difference.
   */
  readonly differentSeatings: number;
  readonly whole: ReciprocityFigures;
  /** A third-octave band each. */
  readonly bands: readonly (ReciprocityFigures & { readonly from: number; readonly to: number })[];
}

/** A pair taken both ways: mean level(a>b) − level(b>a) per band in dB. */
interface BothWays {
  readonly a: number;
  readonly b: number;
  readonly difference: Float64Array;
  /** 1 / variance of the difference, in units of the variance of one take. */
  readonly weight: number;
  readonly sharesSeating: boolean;
}

/**
 * Tests reciprocity on the pairs taken both ways. If emit = receive + J with one J for all units, the two directions of a
 * pair agree; if not, their difference is a term of one unit less that of the other. The mean square that such terms
 * explain is compared with the mean square they leave, so that closed chains of pairs taken both ways are needed.
 * Takes of one session and one seating of both units are compared with each other, so that mounting drops out; only for a
 * pair that has none in common the means over all its seatings are. Without seating labels a session counts as one seating.
 * Differences are averaged within third-octave bands; neighbouring bands count as correlated as they are seen to be.
 * Source: analysis of variance of a paired-difference design, as in H. Scheffé, The Analysis of Variance, 1959 (F test
 * of a linear hypothesis).
 */
export function testReciprocity(set: TakeSet): ReciprocityTest {
  const bands = bandsHolding(set.frequencies, 3);
  const means = bandMeans(set, bands);
  const pairs = pairsBothWays(set, means, bands.length);
  const rest = new Float64Array(pairs.length * bands.length).fill(Number.NaN);
  const sums = bands.map((_, band) => splitSquares(pairs, band, rest, bands.length));
  const share = shareForVariance(neighbourCorrelation(rest, pairs.length, bands.length), bands.length);
  const whole = sums.reduce(
    (total, one) => ({
      unit: total.unit + one.unit,
      unitDof: total.unitDof + one.unitDof,
      rest: total.rest + one.rest,
      restDof: total.restDof + one.restDof,
      squares: total.squares + one.squares,
      count: total.count + one.count,
    }),
    { unit: 0, unitDof: 0, rest: 0, restDof: 0, squares: 0, count: 0 },
  );
  return {
    pairs: pairs.length,
    differentSeatings: pairs.filter((pair) => !pair.sharesSeating).length,
    whole: figures(whole, share),
    bands: bands.map(({ from, to }, band) => ({ from, to, ...figures(sums[band]!, 1) })),
  };
}

interface SumsOfSquares {
  readonly unit: number;
  readonly unitDof: number;
  readonly rest: number;
  readonly restDof: number;
  readonly squares: number;
  readonly count: number;
}

function figures({ unit, unitDof, rest, restDof, squares, count }: SumsOfSquares, share: number): ReciprocityFigures {
  const testable = unitDof > 0 && restDof > 0 && rest > 0;
  const f = testable ? unit / unitDof / (rest / restDof) : Number.NaN;
  return {
    f,
    unitDof: unitDof * share,
    restDof: restDof * share,
    pValue: testable ? fUpper(f, unitDof * share, restDof * share) : Number.NaN,
    rmsDifference: Math.sqrt(squares / count),
  };
}

function pairsBothWays(set: TakeSet, means: Float64Array, bands: number): BothWays[] {
  const end = (unit: string, mount: string) => JSON.stringify([unit, mount]);
  const numbers = new Map<string, number>();
  const directions = new Map<string, number[]>();
  set.takes.forEach((take, t) => {
    const ends = [end(take.emitter, take.emitterMount), end(take.receiver, take.receiverMount)] as const;
    for (const name of ends) if (!numbers.has(name)) numbers.set(name, numbers.size);
    const key = JSON.stringify([numbers.get(ends[0]), numbers.get(ends[1]), take.path]);
    const own = directions.get(key);
    if (own === undefined) directions.set(key, [t]);
    else own.push(t);
  });
  const found: BothWays[] = [];
  for (const [key, forth] of directions) {
    const [a, b, path] = JSON.parse(key) as [number, number, string];
    const back = directions.get(JSON.stringify([b, a, path]));
    if (a >= b || back === undefined) continue;
    const shared = sharedSeatings(set, forth, back);
    const compared = shared.length > 0 ? shared : [{ forth, back }];
    found.push({ a, b, ...meanDifference(means, bands, compared), sharesSeating: shared.length > 0 });
  }
  return found;
}

/** Takes of the two directions of a pair that are to be compared. */
interface Compared {
  readonly forth: readonly number[];
  readonly back: readonly number[];
}

/** The seatings that both directions of a pair have, roles exchanged. */
function sharedSeatings({ takes }: TakeSet, forth: readonly number[], back: readonly number[]): Compared[] {
  const seatings = new Map<string, { forth: number[]; back: number[] }>();
  const at = (session: string, a: string, b: string) => {
    const key = JSON.stringify([session, a, b]);
    const own = seatings.get(key) ?? { forth: [], back: [] };
    seatings.set(key, own);
    return own;
  };
  for (const t of forth) at(takes[t]!.session, takes[t]!.emitterSeating, takes[t]!.receiverSeating).forth.push(t);
  for (const t of back) at(takes[t]!.session, takes[t]!.receiverSeating, takes[t]!.emitterSeating).back.push(t);
  return [...seatings.values()].filter((own) => own.forth.length > 0 && own.back.length > 0);
}

/** Weighted mean over what is compared. Takes without the band leave the weights as they are. */
function meanDifference(means: Float64Array, bands: number, compared: readonly Compared[]) {
  const total = new Float64Array(bands);
  const weights = new Float64Array(bands);
  let weight = 0;
  for (const { forth, back } of compared) {
    const own = 1 / (1 / forth.length + 1 / back.length);
    weight += own;
    for (let band = 0; band < bands; band++) {
      const difference = meanOver(means, bands, forth, band) - meanOver(means, bands, back, band);
      if (Number.isNaN(difference)) continue;
      total[band] = total[band]! + own * difference;
      weights[band] = weights[band]! + own;
    }
  }
  return { difference: total.map((sum, band) => sum / weights[band]!), weight };
}

function meanOver(means: Float64Array, bands: number, takes: readonly number[], band: number): number {
  let sum = 0;
  let count = 0;
  for (const t of takes) {
    const level = means[t * bands + band]!;
    if (Number.isNaN(level)) continue;
    sum += level;
    count++;
  }
  return sum / count;
}

/** Mean of each take over each band, NaN where it has no reading: entry (take, band) at take · bands + band. */
function bandMeans(set: TakeSet, bands: readonly OctaveBand[]): Float64Array {
  const width = set.frequencies.length;
  const position = new Map(bands.map(({ index }, at) => [index, at]));
  const bandOf = Int32Array.from(set.frequencies, (hz) => position.get(bandHolding(hertz(hz), 3).index)!);
  const means = new Float64Array(set.takes.length * bands.length);
  const counts = new Float64Array(means.length);
  for (let t = 0; t < set.takes.length; t++) {
    for (let f = 0; f < width; f++) {
      const level = set.levels[t * width + f]!;
      if (Number.isNaN(level)) continue;
      const at = t * bands.length + bandOf[f]!;
      means[at] = means[at]! + level;
      counts[at] = counts[at]! + 1;
    }
  }
  return means.map((sum, at) => sum / counts[at]!);
}

// Weighted least squares of difference = term(a) − term(b), one unit of each connected stretch being called 0.
function splitSquares(pairs: readonly BothWays[], band: number, rest: Float64Array, width: number): SumsOfSquares {
  const used = pairs.map((pair, p) => ({ pair, p })).filter(({ pair }) => !Number.isNaN(pair.difference[band]!));
  const columnOf = freeColumns(used.map(({ pair }) => pair));
  const n = Math.max(0, ...columnOf.values()) + 1;
  const free = [...columnOf.values()].some((column) => column >= 0) ? n : 0;
  const normal = new Float64Array(free * free);
  const side = new Float64Array(free);
  for (const { pair } of used) {
    const ends: [number, number][] = [
      [columnOf.get(pair.a)!, 1],
      [columnOf.get(pair.b)!, -1],
    ];
    for (const [i, x] of ends) {
      if (i < 0) continue;
      side[i] = side[i]! + pair.weight * x * pair.difference[band]!;
      for (const [j, y] of ends) if (j >= 0) normal[i * free + j] = normal[i * free + j]! + pair.weight * x * y;
    }
  }
  if (free > 0) {
    if (!choleskyInPlace(normal, free)) throw new Error('a grounded graph of pairs has no positive factor');
    choleskySolve(normal, free, side);
  }
  let total = 0;
  let left = 0;
  let plain = 0;
  for (const { pair, p } of used) {
    const value = (unit: number) => (columnOf.get(unit)! >= 0 ? side[columnOf.get(unit)!]! : 0);
    const residual = pair.difference[band]! - (value(pair.a) - value(pair.b));
    rest[p * width + band] = residual * Math.sqrt(pair.weight);
    total += pair.weight * pair.difference[band]! ** 2;
    left += pair.weight * residual ** 2;
    plain += pair.difference[band]! ** 2;
  }
  return {
    unit: total - left,
    unitDof: free,
    rest: left,
    restDof: used.length - free,
    squares: plain,
    count: used.length,
  };
}

/** Column of each unit; −1 for the one of each connected stretch that is called 0. */
function freeColumns(pairs: readonly BothWays[]): Map<number, number> {
  const neighbours = new Map<number, number[]>();
  for (const { a, b } of pairs) {
    neighbours.set(a, [...(neighbours.get(a) ?? []), b]);
    neighbours.set(b, [...(neighbours.get(b) ?? []), a]);
  }
  const columns = new Map<number, number>();
  let next = 0;
  for (const start of neighbours.keys()) {
    if (columns.has(start)) continue;
    columns.set(start, -1);
    const queue = [start];
    for (let unit = queue.pop(); unit !== undefined; unit = queue.pop()) {
      for (const other of neighbours.get(unit)!) {
        if (columns.has(other)) continue;
        columns.set(other, next++);
        queue.push(other);
      }
    }
  }
  return columns;
}
