import { shiftsOfTakes } from '../estimate/shifts-of-takes.ts';
import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { fUpper } from '../numeric/f-distribution.ts';
import { normalUpperQuantile } from '../numeric/normal.ts';
import { studentTwoSided } from '../numeric/student-t.ts';
import type { ConstantShift } from './explain-take.ts';
import type { ScreeningLevels } from './screening-levels.ts';
import { type SpreadOfSquares, spreadOfSquares } from './spread-of-squares.ts';

/** What a take was caught by. */
export type TestKind = 'constant' | 'slope' | 'band' | 'any';

/** The tests of one take in figures. */
export interface TakeTests {
  /** Bonferroni over the tests of the take; NaN where nothing checks it. */
  readonly p: number;
  readonly test: TestKind;
  /** Σ of squared standardised deviations that the deciding test rests on: compared between rival takes. */
  readonly misfit: number;
}

type Note = (take: number, p: number, test: TestKind, misfit: number) => void;

/** Tests of all takes. */
export function testTakes(levels: ScreeningLevels, count: number): { tests: TakeTests[]; spread: SpreadOfSquares } {
  const squares = meanSquares(levels, count);
  const width = squares.width;
  const known = squares.found.filter((own) => own.known > 0);
  const spread = spreadOfSquares(
    known.map(({ square }) => square),
    Math.max(1, width * squares.share),
  );
  return { tests: testsWith(levels, count, squares, spread), spread };
}

/** Tests of some takes only, their squares judged by a spread that was found before. */
export function testSome(
  levels: ScreeningLevels,
  count: number,
  only: readonly number[],
  spread: SpreadOfSquares,
): TakeTests[] {
  return testsWith(levels, count, meanSquares(levels, count, only), spread, only);
}

function testsWith(
  levels: ScreeningLevels,
  count: number,
  squares: MeanSquares,
  spread: SpreadOfSquares,
  only?: readonly number[],
): TakeTests[] {
  const nothing: TakeTests = { p: Number.NaN, test: 'constant', misfit: 0 };
  const tests = new Array<TakeTests>(count).fill(nothing);
  const number = levels.templates.length + 1;
  // Below this many standard uncertainties even the normal distribution gives a chance that the correction makes 1.
  const surelyTame = normalUpperQuantile(0.5 / number);
  const note: Note = (t, p, test, misfit) => {
    const entry = tests[t]!;
    const corrected = Math.min(1, p * number);
    if (Number.isNaN(entry.p) || corrected < entry.p || (corrected === entry.p && misfit > entry.misfit)) {
      tests[t] = { p: corrected, test, misfit };
    }
  };
  for (const { kind, scatter } of levels.templates) {
    if (!scatter.isKnown) continue;
    const { shift, uncertainty, dofOf } = shiftsOfTakes(levels.layout, scatter, only);
    for (let t = 0; t < count; t++) {
      const w = Math.abs(shift[t]! / uncertainty[t]!);
      if (!Number.isNaN(w)) note(t, w < surelyTame ? 1 : studentTwoSided(w, dofOf(t)), kind, w * w);
    }
  }
  noteSquares(squares, spread, only, note);
  return tests;
}

/** Mean squares of the standardised shifts of takes over all frequencies. */
interface MeanSquares {
  readonly width: number;
  /** Share of the frequencies that count as independent by the correlation of neighbours; only where all takes were asked for. */
  readonly share: number;
  /** A take each: how many frequencies are known, and their mean square. Then the mean degrees of freedom behind them. */
  readonly found: readonly { readonly known: number; readonly square: number }[];
  readonly dofOf: (take: number) => number;
}

function meanSquares({ bands, layout }: ScreeningLevels, count: number, only?: readonly number[]): MeanSquares {
  const width = bands.reduce((sum, band) => sum + band.frequencies.length, 0);
  const standardised = new Float64Array(count * width).fill(Number.NaN);
  const parts: { readonly columns: number; readonly dofOf: (take: number) => number }[] = [];
  const takes = only ?? Array.from({ length: count }, (_, t) => t);
  for (const { scatter, frequencies } of bands) {
    if (!scatter.isKnown) continue;
    const columns = frequencies.length;
    const { shift, uncertainty, dofOf } = shiftsOfTakes(layout, scatter, only);
    parts.push({ columns, dofOf });
    for (const t of takes) {
      if (Number.isNaN(uncertainty[t]!)) continue;
      for (let c = 0; c < columns; c++) {
        standardised[t * width + frequencies[c]!] = shift[t * columns + c]! / uncertainty[t]!;
      }
    }
  }
  const nothing = { known: 0, square: Number.NaN };
  const found = new Array<MeanSquares['found'][number]>(count).fill(nothing);
  for (const t of takes) {
    let known = 0;
    let squares = 0;
    for (let f = t * width; f < (t + 1) * width; f++) {
      const value = standardised[f]!;
      if (Number.isNaN(value)) continue;
      known++;
      squares += value * value;
    }
    found[t] = { known, square: squares / known };
  }
  const share =
    only === undefined ? shareForVariance(neighbourCorrelation(standardised, count, width), width) : Number.NaN;
  // Each band's scatter was estimated apart; the mean of their degrees of freedom stands for all.
  const dofOf = (take: number) => {
    let known = 0;
    let spent = 0;
    for (const part of parts) {
      const dof = part.dofOf(take);
      if (Number.isNaN(dof)) continue;
      known += part.columns;
      spent += part.columns / dof;
    }
    return spent > 0 ? known / spent : Number.POSITIVE_INFINITY;
  };
  return { width, share, found, dofOf };
}

/** A chance above this is 1 once it is corrected for the tests of a take, of which there are some. */
const LARGE_CHANCE = 0.5;

/** Any deviation: the mean square, with as many frequencies counted independent as the takes' own spread leaves. */
function noteSquares(
  { width, found, dofOf }: MeanSquares,
  spread: SpreadOfSquares,
  only: readonly number[] | undefined,
  note: Note,
): void {
  for (const t of only ?? found.keys()) {
    const { known, square } = found[t]!;
    if (known === 0) continue;
    const independent = Math.max(1, spread.dof * (known / width));
    const ratio = square / spread.excess;
    // With known scatter the chance is smallest: where even that is large, nothing more is worked out.
    const least = ratio < 1 ? 1 : fUpper(ratio, independent, Number.POSITIVE_INFINITY);
    note(t, least > LARGE_CHANCE ? 1 : fUpper(ratio, independent, dofOf(t)), 'any', ratio * independent);
  }
}

/** Constant shift of takes, NaN where nothing checks them or no scatter is known. */
export function constantShifts(levels: ScreeningLevels, count: number, only?: readonly number[]): ConstantShift[] {
  const constant = levels.templates.find(({ kind }) => kind === 'constant');
  const nothing = { shift: Number.NaN, uncertainty: Number.NaN, dof: Number.NaN };
  if (constant === undefined || !constant.scatter.isKnown) return new Array<ConstantShift>(count).fill(nothing);
  const { shift, uncertainty, dofOf } = shiftsOfTakes(levels.layout, constant.scatter, only);
  return Array.from({ length: count }, (_, t) => ({ shift: shift[t]!, uncertainty: uncertainty[t]!, dof: dofOf(t) }));
}
