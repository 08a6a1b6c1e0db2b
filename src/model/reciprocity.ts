import { choleskyInPlace, choleskySolve } from '../numeric/cholesky.ts';
import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { fUpper } from '../numeric/f-distribution.ts';
import { hertz } from '../quantity/frequency.ts';
import { bandHolding, bandsHolding } from '../quantity/octave-bands.ts';
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
  readonly whole: ReciprocityFigures;
  /** A third-octave band each. */
  readonly bands: readonly (ReciprocityFigures & { readonly from: number; readonly to: number })[];
}

/** A pair taken both ways: mean level(a>b) − level(b>a) per band in dB, and how many takes stand behind it. */
interface BothWays {
  readonly a: number;
  readonly b: number;
  readonly difference: Float64Array;
  readonly weight: number;
}

/**
 * Tests reciprocity on the pairs taken both ways. If emit = receive + J with one J for all units, the two directions of a
 * pair agree; if not, their difference is a term of one unit less that of the other. The mean square that such terms
 * explain is compared with the mean square they leave, so that closed chains of pairs taken both ways are needed.
 * Differences are averaged within third-octave bands; neighbouring bands count as correlated as they are seen to be.
 * Source: analysis of variance of a paired-difference design, as in H. Scheffé, The Analysis of Variance, 1959 (F test
 * of a linear hypothesis).
 */
export function testReciprocity(set: TakeSet): ReciprocityTest {
  const bands = bandsHolding(set.frequencies, 3);
  const pairs = pairsBothWays(
    set,
    bands.map((band) => band.index),
  );
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

function pairsBothWays(set: TakeSet, bandIndices: readonly number[]): BothWays[] {
  const end = (unit: string, mount: string) => JSON.stringify([unit, mount]);
  const numbers = new Map<string, number>();
  const directions = new Map<string, number[]>();
  set.takes.forEach((take, t) => {
    const ends = [end(take.emitter, take.emitterMount), end(take.receiver, take.receiverMount)] as const;
    for (const name of ends) if (!numbers.has(name)) numbers.set(name, numbers.size);
    const key = JSON.stringify([numbers.get(ends[0]), numbers.get(ends[1]), take.path]);
    directions.set(key, [...(directions.get(key) ?? []), t]);
  });
  const found: BothWays[] = [];
  for (const [key, forth] of directions) {
    const [a, b, path] = JSON.parse(key) as [number, number, string];
    const back = directions.get(JSON.stringify([b, a, path]));
    if (a >= b || back === undefined) continue;
    const there = bandMeans(set, forth, bandIndices);
    const here = bandMeans(set, back, bandIndices);
    const difference = there.map((level, band) => level - here[band]!);
    found.push({ a, b, difference, weight: 1 / (1 / forth.length + 1 / back.length) });
  }
  return found;
}

function bandMeans(set: TakeSet, takes: readonly number[], bandIndices: readonly number[]): Float64Array {
  const width = set.frequencies.length;
  const position = new Map(bandIndices.map((index, at) => [index, at]));
  const sums = new Float64Array(bandIndices.length);
  const counts = new Float64Array(bandIndices.length);
  for (let f = 0; f < width; f++) {
    const band = position.get(bandHolding(hertz(set.frequencies[f]!), 3).index)!;
    for (const take of takes) {
      const level = set.levels[take * width + f]!;
      if (Number.isNaN(level)) continue;
      sums[band] = sums[band]! + level;
      counts[band] = counts[band]! + 1;
    }
  }
  return sums.map((sum, band) => sum / counts[band]!);
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
