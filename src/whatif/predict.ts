import { shiftsOfTakes } from '../estimate/shifts-of-takes.ts';
import type { OpenFinding } from '../findings/examination.ts';
import { openFindings } from '../findings/open-findings.ts';
import { DEFAULT_RISK, DETECTION_POWER, DETECTION_RISK } from '../findings/thresholds.ts';
import type { Role } from '../model/model.ts';
import type { ModelOptions } from '../model/model-options.ts';
import type { LinkStatus, Separability } from '../model/separability.ts';
import { detectability } from '../numeric/detectability.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import { type BenchCost, type BenchTimes, costOf } from './costs.ts';
import type { Design } from './design.ts';
import { partnerTest } from './partner-effect.ts';
import { type PlannedBench, plannedBench, responsesInOrder } from './planned-bench.ts';
import { type PlannedCovariance, plannedCovariance } from './planned-covariance.ts';

/** What one unit will have. Standard uncertainties in dB; NaN where the design gives none. */
export interface UnitPrediction {
  readonly unit: string;
  readonly mount: string;
  readonly role: Role;
  /** `open` also for a unit that no take of the design names. */
  readonly status: LinkStatus;
  /** For the three uses: the mean over what will be seen, the unit seated once more, and that on another partner. */
  readonly asSeated: number;
  readonly reseated: number;
  readonly otherPartner: number;
  /** Smallest partner effect that would be found, and the chance to find the one asked for; see `partnerTest`. */
  readonly smallestEffect: number;
  readonly chance: number;
}

/** What one take will have. */
export interface TakePrediction {
  /** Index into the takes of the planned set. */
  readonly take: number;
  /** 1 − leverage: 0 where the take is needed to the full. */
  readonly redundancy: number;
  /** Smallest constant shift that would be found, in dB; NaN where nothing checks the take. */
  readonly smallestShift: number;
}

/** Differences of units in the same role that the design tells, as seated, in dB; NaN where it tells none. */
export interface DifferencePrediction {
  /** Root mean square of their uncertainties. */
  readonly mean: number;
  readonly worst: number;
  /** Indices into the units of the worst one. */
  readonly worstBetween: readonly [number, number] | undefined;
  /** How many of all differences in the same role are told. */
  readonly told: number;
  readonly all: number;
}

/** A design in one stretch of frequencies. */
export interface BandPrediction {
  readonly scatter: AssumedBand;
  readonly units: readonly UnitPrediction[];
  /** Root mean square and largest uncertainty of the units that are told, as seated; NaN where none is. */
  readonly mean: number;
  readonly worst: number;
  readonly differences: DifferencePrediction;
  readonly takes: readonly TakePrediction[];
  readonly covariance: PlannedCovariance;
}

export interface Prediction {
  readonly bench: PlannedBench;
  readonly bands: readonly BandPrediction[];
  /** The band with the largest mean uncertainty, the first one where none is told: index into `bands`. */
  readonly worstBand: number;
  readonly open: readonly OpenFinding[];
  readonly cost: BenchCost;
}

export interface PredictOptions {
  readonly model?: ModelOptions | undefined;
  readonly times: BenchTimes;
  /** Partner effect in dB whose chance is wanted. */
  readonly effect?: number | undefined;
  /** Chance that a bench without any partner effect has a unit said to show one. */
  readonly risk?: number | undefined;
}

/** Factor from an uncertainty to the smallest shift that is found: the same as for takes of a run. */
export const DETECTABILITY = detectability(DETECTION_RISK, DETECTION_POWER);

/**
 * What a design will deliver under an assumed scatter. Nothing is solved: the covariance depends on the design only.
 * Cost: links³ a band.
 * @throws InputError where the model's options name units that the design does not have.
 */
export async function predict(
  design: Design,
  bands: readonly AssumedBand[],
  options: PredictOptions,
): Promise<Prediction> {
  const bench = plannedBench(design, options.model, bands.map(middleOf));
  const predicted: BandPrediction[] = [];
  for (const [f, band] of bands.entries()) predicted.push(await predictBand(bench, band, f, options));
  const means = predicted.map(({ mean }) => (Number.isNaN(mean) ? 0 : mean));
  return {
    bench,
    bands: predicted,
    worstBand: means.indexOf(Math.max(...means)),
    open: openFindings(bench.set, bench.model, bench.patterns),
    cost: costOf(design.seatings, options.times),
  };
}

/** Where certificates are looked up: hertz. */
function middleOf({ from, to }: AssumedBand, b: number): number {
  return Number.isNaN(from) ? 1000 + b : Math.sqrt(from * to);
}

async function predictBand(
  bench: PlannedBench,
  scatter: AssumedBand,
  f: number,
  options: PredictOptions,
): Promise<BandPrediction> {
  const covariance = await plannedCovariance(bench, scatter, f);
  const { separability } = bench.patterns.patterns[bench.patterns.patternOf[f]!]!;
  const units = unitPredictions(bench, scatter, covariance, separability, options);
  const told = units.filter(({ status }) => status !== 'open').map(({ asSeated }) => asSeated);
  return {
    scatter,
    units,
    mean: rootMeanSquare(told),
    worst: told.length === 0 ? Number.NaN : Math.max(...told),
    differences: differencesOf(bench, covariance, separability),
    takes: takePredictions(bench, covariance),
    covariance,
  };
}

function unitPredictions(
  bench: PlannedBench,
  scatter: AssumedBand,
  covariance: PlannedCovariance,
  { status }: Separability,
  options: PredictOptions,
): UnitPrediction[] {
  const { design, model, layout } = bench;
  const n = model.linksPerFrequency;
  const { reseat, partner } = scatter;
  const placed = new Set(model.responses.map(({ unit, mount }) => JSON.stringify([unit, mount])));
  // Bonferroni, the first step of the correction that a run makes.
  const risk = (options.risk ?? DEFAULT_RISK) / Math.max(1, placed.size);
  const found = responsesInOrder(bench).map((response): UnitPrediction => {
    const { unit, mount, role, link } = model.responses[response]!;
    const isOpen = status[link] === 'open';
    const own = isOpen ? Number.NaN : Math.max(0, covariance.covariance[link * n + link]!);
    const links = new Set(model.responses.filter((r) => r.unit === unit && r.mount === mount).map((r) => r.link));
    const test = partnerTest(layout, covariance.scatter, scatter, links, {
      risk,
      power: DETECTION_POWER,
      effect: options.effect,
    });
    return {
      unit,
      mount,
      role,
      status: status[link]!,
      asSeated: Math.sqrt(own),
      reseated: Math.sqrt(own + reseat ** 2 / 2),
      otherPartner: Math.sqrt(own + reseat ** 2 / 2 + partner ** 2 / 2),
      smallestEffect: test.smallest,
      chance: test.chance,
    };
  });
  const named = new Set(found.map(({ unit }) => unit));
  const untaken = design.units
    .filter((unit) => !named.has(unit))
    .map(
      (unit): UnitPrediction => ({
        unit,
        mount: '',
        role: 'both',
        status: 'open',
        asSeated: Number.NaN,
        reseated: Number.NaN,
        otherPartner: Number.NaN,
        smallestEffect: Number.NaN,
        chance: Number.NaN,
      }),
    );
  return [...found, ...untaken];
}

/** A movement of two links that differs by less than this is rounding. */
const MOVES_ALIKE = 1e-9;

function differencesOf(
  bench: PlannedBench,
  { covariance }: PlannedCovariance,
  { directions }: Separability,
): DifferencePrediction {
  const { model } = bench;
  const n = model.linksPerFrequency;
  const responses = responsesInOrder(bench).map((response) => model.responses[response]!);
  let squares = 0;
  let told = 0;
  let all = 0;
  let worst = Number.NaN;
  let worstBetween: readonly [number, number] | undefined;
  responses.forEach((one, i) => {
    responses.forEach((other, j) => {
      if (j <= i || one.role !== other.role || one.link === other.link) return;
      all++;
      const isFree = directions.some(
        ({ movement }) => Math.abs(movement[one.link]! - movement[other.link]!) > MOVES_ALIKE,
      );
      if (isFree) return;
      const variance =
        covariance[one.link * n + one.link]! +
        covariance[other.link * n + other.link]! -
        2 * covariance[one.link * n + other.link]!;
      told++;
      squares += variance;
      if (Number.isNaN(worst) || variance > worst) {
        worst = variance;
        worstBetween = [i, j];
      }
    });
  });
  return {
    mean: told === 0 ? Number.NaN : Math.sqrt(squares / told),
    worst: Math.sqrt(worst),
    worstBetween,
    told,
    all,
  };
}

function takePredictions({ layout, set }: PlannedBench, { scatter, redundancy }: PlannedCovariance): TakePrediction[] {
  const { uncertainty } = shiftsOfTakes(layout, scatter);
  return set.takes.map((_, take) => ({
    take,
    redundancy: redundancy[take]!,
    smallestShift: DETECTABILITY * uncertainty[take]!,
  }));
}

function rootMeanSquare(values: readonly number[]): number {
  return Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
}
