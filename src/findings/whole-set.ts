import { isGiven, type Solution } from '../estimate/solution.ts';
import { thirdOctaves } from '../estimate/third-octaves.ts';
import type { Model } from '../model/model.ts';
import { chiSquareUpper } from '../numeric/chi-square.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { chainRows } from './chain-rows.ts';
import { independentFrequencies, type MisfitVectors, ROUNDING, standingFor } from './independent-frequencies.ts';
import {
  type LackOfFitDesign,
  type LackOfFitTest,
  lackOfFitDesign,
  lackOfFitTest,
  splitMisfit,
} from './lack-of-fit.ts';
import { mergedChains } from './merged-chains.ts';
import { rowLevels, type SeatedRow, type SeatedRows, seatedRows } from './seated-rows.ts';

/** Σ (residual/u)² against its degrees of freedom. */
export interface ChiSquareTest {
  readonly chiSquare: number;
  /** Σ redundancy. */
  readonly dof: number;
  /** How many of the band's frequencies count as independent; both figures above shrink to their part before the test. */
  readonly independent: number;
  readonly pValue: number;
  /** Corrected for the number of bands (Holm 1979). */
  readonly pAdjusted: number;
}

/** What pairs show beyond the additive model, against what the takes of a pair show between themselves. */
export interface PairLackOfFit extends LackOfFitTest {
  /** Corrected for the number of bands (Holm 1979). */
  readonly pAdjusted: number;
}

/** All readings of a third-octave band together. */
export interface WholeBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  readonly frequencies: number;
  /** Absent where the uncertainties come from the takes themselves, or the band has no redundancy. */
  readonly chiSquare: ChiSquareTest | undefined;
  /** Absent where no pair was repeated or reseated, or pairs leave no degrees of freedom. */
  readonly lackOfFit: PairLackOfFit | undefined;
}

export interface WholeSetFindings {
  readonly bands: readonly WholeBand[];
  /** What pure error is made of: `reseats` where any pair was mounted again, as repeats alone know nothing of that. */
  readonly pureErrorFrom: SeatedRows['from'];
  /** Chance that any band misfits as much as the worst one, all bands taken into account; NaN where nothing was tested. */
  readonly chiSquareP: number;
  readonly lackOfFitP: number;
}

export interface WholeSetOptions {
  /** Takes that were left out of the solution. */
  readonly without?: ReadonlySet<number>;
}

/**
 * The whole set per third-octave band: chi-square of the weighted residuals where the uncertainty of readings is given,
 * and lack of fit against pure error where pairs were taken more than once. Neighbouring frequencies count only as far as
 * they are seen to be independent.
 * Where pairs were mounted again, the rows are means over the repeats of a seating, all of the same weight; else single
 * takes. All links count as unknown at each frequency for lack of fit, so that references have no say in it.
 * Cost: readings × frequencies of a band / 2 (at most 40 of a band are looked at for their correlation).
 */
export function wholeSet(
  set: TakeSet,
  model: Model,
  solution: Solution,
  options: WholeSetOptions = {},
): WholeSetFindings {
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const members = bands.map(() => [] as number[]);
  bandOf.forEach((band, f) => {
    members[band]!.push(f);
  });
  const { rows, from } = seatedRows(set, mergedChains(set, model, options.without ?? new Set()));
  const all = from === 'nothing' ? undefined : { rows, levels: rowLevels(set, model, rows), designs: new Map() };
  const raw = members.map((own) => ({
    chiSquare: chiSquareIn(set, solution, own),
    lackOfFit: all && lackOfFitIn(all, set.frequencies.length, own),
  }));
  const chiSquares = holmAdjusted(raw.map(({ chiSquare }) => chiSquare?.pValue ?? Number.NaN));
  const lacks = holmAdjusted(raw.map(({ lackOfFit }) => lackOfFit?.pValue ?? Number.NaN));
  return {
    bands: raw.map(({ chiSquare, lackOfFit }, b) => ({
      from: bands[b]!.from,
      to: bands[b]!.to,
      frequencies: members[b]!.length,
      chiSquare: chiSquare && { ...chiSquare, pAdjusted: chiSquares[b]! },
      lackOfFit: lackOfFit && { ...lackOfFit, pAdjusted: lacks[b]! },
    })),
    pureErrorFrom: from,
    chiSquareP: least(chiSquares),
    lackOfFitP: least(lacks),
  };
}

function chiSquareIn(
  set: TakeSet,
  { residuals, redundancy, readingUncertainty }: Solution,
  frequencies: readonly number[],
): Omit<ChiSquareTest, 'pAdjusted'> | undefined {
  const { source, values } = readingUncertainty;
  if (!isGiven(source)) return undefined;
  const width = set.frequencies.length;
  const stands = standingFor(frequencies.length);
  const vectors: MisfitVectors[] = [];
  const sums = { chiSquare: 0, dof: 0, used: 0 };
  let own = new Float64Array(set.takes.length);
  frequencies.forEach((f, k) => {
    own.fill(0);
    let dof = 0;
    for (let t = 0; t < own.length; t++) {
      const cell = t * width + f;
      // Takes that were left out have a residual, and no part in the fit.
      if (Number.isNaN(redundancy[cell]!) || !(values[cell]! > 0)) continue;
      own[t] = residuals[cell]! / values[cell]!;
      dof += redundancy[cell]!;
    }
    sums.chiSquare += squaresOf(own);
    sums.dof += dof;
    sums.used += dof > ROUNDING ? 1 : 0;
    if (!stands[k]) return;
    vectors.push({ parts: [own], dof });
    own = new Float64Array(own.length);
  });
  // Sums of redundancies that should be 0 are rounding.
  const independent = independentFrequencies(vectors);
  if (!(sums.dof > ROUNDING * set.takes.length)) return undefined;
  const { chiSquare, dof } = sums;
  const share = independent / sums.used;
  return { chiSquare, dof, independent, pValue: chiSquareUpper(chiSquare * share, dof * share) };
}

/** Rows with their levels at all frequencies, and the designs met so far by the rows that are there. */
interface PureErrorRows {
  readonly rows: readonly SeatedRow[];
  readonly levels: Float64Array;
  readonly designs: Map<string, LackOfFitDesign>;
}

function lackOfFitIn(all: PureErrorRows, width: number, frequencies: readonly number[]): LackOfFitTest | undefined {
  const stands = standingFor(frequencies.length);
  const vectors: MisfitVectors[] = [];
  const sums = { lack: 0, lackDof: 0, pure: 0, pureDof: 0, used: 0 };
  frequencies.forEach((f, k) => {
    const { y, present, design } = measuredAt(all, width, f);
    const parts = splitMisfit(design, y);
    const { lackDof, pureDof } = design;
    // What is left of a part without freedom is rounding.
    sums.lack += lackDof > 0 ? squaresOf(parts.lack) : 0;
    sums.pure += pureDof > 0 ? squaresOf(parts.pure) : 0;
    sums.lackDof += lackDof;
    sums.pureDof += pureDof;
    sums.used += lackDof + pureDof > 0 ? 1 : 0;
    if (!stands[k]) return;
    const onAll = (values: Float64Array) => onAllRows(values, present, all.rows.length);
    vectors.push({ parts: [onAll(parts.lack), onAll(parts.pure)], dof: lackDof + pureDof });
  });
  if (sums.lackDof === 0 || sums.pureDof === 0) return undefined;
  const share = independentFrequencies(vectors) / sums.used;
  return lackOfFitTest(sums.lack, sums.lackDof * share, sums.pure, sums.pureDof * share);
}

/** The rows measured at a frequency: their numbers (absent where all were), their levels, and their design. */
function measuredAt({ rows, levels, designs }: PureErrorRows, width: number, f: number) {
  const column = Float64Array.from(rows, (_, r) => levels[r * width + f]!);
  const present = column.some(Number.isNaN) ? [...rows.keys()].filter((r) => !Number.isNaN(column[r]!)) : undefined;
  const key = present?.join() ?? 'all';
  const design = designs.get(key) ?? designOf(present === undefined ? rows : present.map((r) => rows[r]!));
  designs.set(key, design);
  return { y: present === undefined ? column : Float64Array.from(present, (r) => column[r]!), present, design };
}

function designOf(rows: readonly SeatedRow[]): LackOfFitDesign {
  const numbers = new Map<number, number>();
  const group = Int32Array.from(rows, ({ chain }) => {
    if (!numbers.has(chain)) numbers.set(chain, numbers.size);
    return numbers.get(chain)!;
  });
  return lackOfFitDesign(chainRows(rows), group);
}

function onAllRows(values: Float64Array, present: readonly number[] | undefined, count: number): Float64Array {
  if (present === undefined) return values;
  const all = new Float64Array(count);
  present.forEach((r, k) => {
    all[r] = values[k]!;
  });
  return all;
}

function squaresOf(values: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < values.length; k++) sum += values[k]! * values[k]!;
  return sum;
}

function least(values: readonly number[]): number {
  const tested = values.filter((value) => !Number.isNaN(value));
  return tested.length === 0 ? Number.NaN : Math.min(...tested);
}
