import { scatterLadder } from '../estimate/scatter-ladder.ts';
import { LINK_STATUS, type ReadingUncertainty, type Solution } from '../estimate/solution.ts';
import { type ThirdOctaves, thirdOctaves } from '../estimate/third-octaves.ts';
import { RECIPROCITY_RISK } from '../model/choose-model.ts';
import type { Model } from '../model/model.ts';
import { detectability } from '../numeric/detectability.ts';
import { coverageFactors } from '../numeric/student-t.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { changedUnits } from './changed-units.ts';
import { checkingTake } from './checking-take.ts';
import type {
  BandLevel,
  Examination,
  ExtraTake,
  OpenFinding,
  PairFinding,
  TakeFinding,
  TakeVerdict,
  UnitFinding,
  WholeFinding,
} from './examination.ts';
import { failingBands } from './failing-bands.ts';
import { holdFindings } from './holds.ts';
import { levelMisfit } from './level-misfit.ts';
import type { LookalikeFinding } from './lookalike-test.ts';
import { loopFindings } from './loops.ts';
import { mountDifferences } from './mount-differences.ts';
import { openFindings } from './open-findings.ts';
import { reciprocityFindings } from './reciprocity-bands.ts';
import type { Settled } from './settle.ts';
import { DETECTION_POWER, DETECTION_RISK } from './thresholds.ts';
import { wholeSet } from './whole-set.ts';

export interface ExamineOptions {
  /** Coverage probability of expanded uncertainties, such as 0.95. */
  readonly coverage: number;
  /** Effect of a partner in dB that does not matter. */
  readonly tolerance: number;
  /** Chance that a clean set gets any take flagged. */
  readonly risk: number;
  /** What the test of declared look-alikes found (`testLookalikes`); none where absent. */
  readonly declared?: readonly LookalikeFinding[];
}

/** Judges a settled solution: takes, pairs, units, the whole, and what is open. Cost: linear in the readings. */
export function examine(set: TakeSet, model: Model, settled: Settled, options: ExamineOptions): Examination {
  const { solution, screening } = settled;
  const bands = thirdOctaves(set.frequencies);
  const takes = set.takes.map((_, take) => takeFinding(set, model, settled, take, bands));
  const factorOf = coverageFactors(options.coverage);
  return {
    takes,
    pairs: pairFindings(set, takes),
    units: model.responses.map((_, response) => unitFinding(set, model, solution, response, factorOf)),
    open: [...openFindings(set, model, solution), ...gainFindings(model, solution)],
    lookalikes: options.declared ?? [],
    failing: failingBands(screening.levels, options),
    changed: changedUnits(set, model, screening.levels, options.risk),
    holds: holdFindings(model, screening.levels, options),
    mounts: mountDifferences(set, model, solution, factorOf),
    scatter: scatterLadder(set, model, solution, { ...options, exclude: settled.leftOut }),
    loops: loopFindings(set, model, asIndependent(solution)),
    levels: levelMisfit(set, model, { risk: options.risk }),
    // The same risk as where the model is chosen: what was not enough to choose otherwise is not held against the choice.
    reciprocity: reciprocityFindings(withoutTakes(set, settled.leftOut), model, RECIPROCITY_RISK),
    bands: wholeSet(set, model, settled.first, { without: settled.leftOut }),
    whole: wholeFinding(solution, settled.first.readingUncertainty, screening.isModelFailing),
  };
}

function withoutTakes(set: TakeSet, without: ReadonlySet<number>): TakeSet {
  const width = set.frequencies.length;
  const levels = set.levels.map((level, cell) => (without.has(Math.floor(cell / width)) ? Number.NaN : level));
  return without.size === 0 ? set : { ...set, levels };
}

/** The solution with each reading's uncertainty as that of an independent one of the same weight: means of takes then have the right u. */
function asIndependent(solution: Solution): Solution {
  const { readingUncertainty } = solution;
  const values = readingUncertainty.independent ?? readingUncertainty.values;
  return { ...solution, readingUncertainty: { ...readingUncertainty, values } };
}

const DETECTABILITY = detectability(DETECTION_RISK, DETECTION_POWER);

function takeFinding(set: TakeSet, model: Model, settled: Settled, take: number, bands: ThirdOctaves): TakeFinding {
  const { solution, screening, leftOut } = settled;
  const width = set.frequencies.length;
  let readings = 0;
  let squares = 0;
  let redundancy = 0;
  for (let f = 0; f < width; f++) {
    const residual = solution.residuals[take * width + f]!;
    if (Number.isNaN(residual)) continue;
    readings++;
    squares += residual * residual;
    redundancy += solution.redundancy[take * width + f]!;
  }
  const { pValue, verdict, shift, shiftUncertainty, tiedWith } = screening.takes[take]!;
  return {
    take,
    readings,
    rmsResidual: readings > 0 ? Math.sqrt(squares / readings) : Number.NaN,
    offset: shift,
    offsetUncertainty: shiftUncertainty,
    smallestShift: DETECTABILITY * shiftUncertainty,
    worst: worstBand(set, solution, take, bands),
    redundancy: readings > 0 ? redundancy / readings : Number.NaN,
    pValue,
    verdict,
    isLeftOut: leftOut.has(take),
    tiedWith,
    explained: settled.explained.find((explained) => explained.take === take),
    cure: cureOf(set, model, take, verdict),
  };
}

function worstBand(
  set: TakeSet,
  solution: Solution,
  take: number,
  { bands, bandOf }: ThirdOctaves,
): BandLevel | undefined {
  const width = set.frequencies.length;
  const sums = new Float64Array(bands.length);
  const counts = new Float64Array(bands.length);
  for (let f = 0; f < width; f++) {
    const residual = solution.residuals[take * width + f]!;
    if (Number.isNaN(residual)) continue;
    const band = bandOf[f]!;
    sums[band] = sums[band]! + residual;
    counts[band] = counts[band]! + 1;
  }
  let worst: BandLevel | undefined;
  bands.forEach(({ from, to }, band) => {
    const level = sums[band]! / counts[band]!;
    if (counts[band]! > 0 && (worst === undefined || Math.abs(level) > Math.abs(worst.level)))
      worst = { from, to, level };
  });
  return worst;
}

function pairFindings(set: TakeSet, takes: readonly TakeFinding[]): PairFinding[] {
  const groups = new Map<string, number[]>();
  set.takes.forEach(({ emitter, receiver }, t) => {
    const key = JSON.stringify([emitter, receiver]);
    groups.set(key, [...(groups.get(key) ?? []), t]);
  });
  return [...groups.values()].map((members): PairFinding => {
    const used = members.map((t) => takes[t]!).filter((take) => take.readings > 0);
    const readings = used.reduce((sum, take) => sum + take.readings, 0);
    const mean = (of: (take: TakeFinding) => number) =>
      used.reduce((sum, take) => sum + take.readings * of(take), 0) / readings;
    const { emitter, receiver } = set.takes[members[0]!]!;
    return {
      emitter,
      receiver,
      takes: members,
      rmsResidual: Math.sqrt(mean((take) => take.rmsResidual ** 2)),
      offset: mean((take) => take.offset),
      redundancy: mean((take) => take.redundancy),
      pValue: used.reduce((least, { pValue }) => (pValue < least || Number.isNaN(least) ? pValue : least), Number.NaN),
      verdict: worstVerdict(used),
    };
  });
}

/** A take that nothing checks needs another pair; a tied one shows what it is when its own pair is mounted again. */
function cureOf(set: TakeSet, model: Model, take: number, verdict: TakeVerdict): ExtraTake | undefined {
  const { emitter, receiver, path } = set.takes[take]!;
  if (verdict === 'tied') return { emitter, receiver, path };
  return verdict === 'uncheckable' ? checkingTake(set, model, take) : undefined;
}

const WORST_FIRST: readonly TakeVerdict[] = ['flagged', 'tied', 'uncheckable', 'not tested', 'agrees'];

function worstVerdict(takes: readonly TakeFinding[]): TakeVerdict {
  return WORST_FIRST.find((verdict) => takes.some((take) => take.verdict === verdict)) ?? 'not tested';
}

function unitFinding(
  set: TakeSet,
  model: Model,
  solution: Solution,
  response: number,
  factorOf: (dof: number) => number,
): UnitFinding {
  const { link, offset } = model.responses[response]!;
  const n = model.linksPerFrequency;
  const counts = { ok: 0, datum: 0, open: 0 };
  const levels: number[] = [];
  const uncertainties: number[] = [];
  const expanded: number[] = [];
  for (let f = 0; f < set.frequencies.length; f++) {
    const cell = f * n + link;
    const status = LINK_STATUS[solution.status[cell]!]!;
    counts[status]++;
    if (status === 'open') continue;
    levels.push(solution.estimates[cell]! + (offset?.[f] ?? 0));
    const u = solution.uncertainty[cell]!;
    if (Number.isNaN(u)) continue;
    uncertainties.push(u);
    expanded.push(u * factorOf(solution.dof[cell]!));
  }
  const typical = (uncertainty: Float64Array) =>
    median([...set.frequencies.keys()].map((f) => uncertainty[f * n + link]!).filter((u) => !Number.isNaN(u)));
  return {
    response,
    medianLevel: median(levels),
    medianUncertainty: median(uncertainties),
    medianExpanded: median(expanded),
    medianReseatUncertainty: typical(solution.reseatUncertainty),
    medianPartnerUncertainty: typical(solution.partnerUncertainty),
    counts,
    unchecked: isUnchecked(set, model, solution, link),
  };
}

/** A unit none of whose readings has redundancy, although it has readings. */
function isUnchecked(set: TakeSet, model: Model, solution: Solution, link: number): boolean {
  const width = set.frequencies.length;
  let readings = 0;
  for (let t = 0; t < set.takes.length; t++) {
    if (!model.chains[t]!.links.includes(link)) continue;
    for (let f = 0; f < width; f++) {
      const redundancy = solution.redundancy[t * width + f]!;
      if (redundancy > 0) return false;
      if (!Number.isNaN(redundancy)) readings++;
    }
  }
  return readings > 0;
}

function gainFindings(model: Model, solution: Solution): OpenFinding[] {
  const pinned = solution.gains.filter((gain) => gain.status === 'datum');
  return pinned.map((gain) => ({
    kind: 'gain',
    status: 'datum',
    responses: [model.links[gain.link]!.name],
    sides: undefined,
    convention: `${model.links[gain.link]!.name} = 0 dB`,
    frequencies: [...solution.patternOf.keys()],
    extraTakes: [],
  }));
}

/** @param reading what the readings say of themselves, without the scatter of seatings and partners. */
function wholeFinding(solution: Solution, reading: ReadingUncertainty, isModelFailing: boolean): WholeFinding {
  const { residuals, redundancy } = solution;
  let count = 0;
  let squares = 0;
  let weighted = 0;
  let weightedDof = 0;
  for (let cell = 0; cell < residuals.length; cell++) {
    const residual = residuals[cell]!;
    // Takes that were left out have a residual, and no part in the fit.
    if (Number.isNaN(residual) || Number.isNaN(redundancy[cell]!)) continue;
    count++;
    squares += residual * residual;
    // Bands without repeats have no uncertainty to hold against.
    const u = reading.values[cell]!;
    if (Number.isNaN(u)) continue;
    weighted += (residual / u) ** 2;
    weightedDof += solution.redundancy[cell]!;
  }
  const degreesOfFreedom = solution.degreesOfFreedom.reduce((sum, dof) => sum + dof, 0);
  const isOwn = reading.source === 'residuals' || reading.source === 'none';
  return {
    rmsResidual: Math.sqrt(squares / count),
    residualDeviation: degreesOfFreedom > 0 ? Math.sqrt(squares / degreesOfFreedom) : Number.NaN,
    degreesOfFreedom,
    chiSquarePerDof: weightedDof > 0 && !isOwn ? weighted / weightedDof : Number.NaN,
    isModelFailing,
  };
}

function median(values: number[]): number {
  if (values.length === 0) return Number.NaN;
  const sorted = Float64Array.from(values).sort();
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}
