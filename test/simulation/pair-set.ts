import { type RandomStream, randomStream } from '../../src/numeric/random.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { type Planned, planTakes, takeRecord, unitName } from './planned-takes.ts';
import { addedByFaults, drift, madeWith, type PlantedFault, refuseImpossible, takesTouched } from './planted-faults.ts';
import {
  type Bell,
  type BellState,
  drawResponse,
  drawState,
  levelOf,
  type SimulatedResponse,
} from './simulated-units.ts';
import type { SimulationOptions } from './simulation-options.ts';
import { smoothCurves } from './smooth-curves.ts';

export interface SimulatedSet {
  readonly set: TakeSet;
  /** True responses at the nominal seating and loading, in dB, by the name of the model's link: `U01`, or `U01 emit` and `U01 receive`. */
  readonly truth: ReadonlyMap<string, Float64Array>;
  /** The faults with the takes they touch, ascending. */
  readonly planted: readonly { readonly fault: PlantedFault; readonly takes: readonly number[] }[];
}

/** A unit in one seating. */
interface Seated {
  readonly curve: Float64Array;
  readonly state: BellState;
}

const ROLES = ['emit', 'receive'] as const;
/** Each kind of chance has a stream of its own, so that planting a fault changes nothing else. */
const STREAM = { responses: 0, seatings: 1, partners: 2, readings: 3, faults: 4 } as const;

/**
 * Simulates a set of takes: level = emit + receive + both seatings + partner + gain + noise, with faults on top.
 * Takes come in rounds (seatings), within them pair by pair, repeat by repeat, there and back: take number
 * ((round · pairs + pair) · repeats + repeat) · (1 or 2 ways) + way. The same options give the same set.
 * @throws RangeError for a fault that names a take or a unit that is not there, or that cannot show.
 */
export function simulatePairs(options: SimulationOptions): SimulatedSet {
  const frequencies = options.frequencies ?? logSpaced(60, 10_000, 320_000);
  const faults = options.faults ?? [];
  const takes = planTakes(options);
  refuseImpossible(faults, options, takes.length);
  const responses = drawResponses(options, frequencies, faults);
  const loadings = drawLoadings(options);
  const seated = seatUnits(options, frequencies, takes, responses);
  const partners = partnerCurves(options, frequencies, takes);
  const noise = randomStream(options.seed, STREAM.readings);
  const extraNoise = randomStream(options.seed, STREAM.faults);
  const levels = new Float64Array(takes.length * frequencies.length);
  const repeatScatter = options.repeatScatter ?? 0;
  takes.forEach((take, t) => {
    const really = madeWith(take, t, faults);
    const ends = ROLES.map((role, end) => {
      const [own, other] = end === 0 ? [really.emitter, really.receiver] : [really.receiver, really.emitter];
      const seating = seated(own, end === 0 ? really.emitterSeating : really.receiverSeating);
      const level = levelOf(responses[own]![role], frequencies, seating.state, loadings[own]![other]!);
      return level.map((value, f) => value + seating.curve[f]! + drift(faults, own, t));
    });
    const partner = partners(really.emitter, really.receiver);
    const added = addedByFaults(faults, t, frequencies);
    const extra = faults.reduce((sum, f) => (f.kind === 'scatter' && f.take === t ? Math.hypot(sum, f.db) : sum), 0);
    const gain = options.gains?.[take.round] ?? 0;
    for (let f = 0; f < frequencies.length; f++) {
      let level = ends[0]![f]! + ends[1]![f]! + partner[f]! + gain + added[f]! + repeatScatter * noise.normal();
      if (extra > 0) level += extra * extraNoise.normal();
      levels[t * frequencies.length + f] = level;
    }
  });
  return {
    set: {
      takes: takes.map((take, t) => takeRecord(take, t, takes.length, frequencies.length, options)),
      frequencies,
      levels,
      uncertainty: options.ownUncertainty ? new Float64Array(levels.length).fill(repeatScatter) : undefined,
      grid: { kind: 'as measured' },
      unused: [],
      notices: [],
    },
    truth: truthOf(options, responses, frequencies),
    planted: faults.map((fault) => ({ fault, takes: takesTouched(fault, takes) })),
  };
}

/** `count` frequencies (at least 2) at equal ratios, both ends included, in hertz. */
export function logSpaced(count: number, from: number, to: number): Float64Array {
  return Float64Array.from({ length: count }, (_, k) => from * (to / from) ** (k / (count - 1)));
}

type RoleResponses = Readonly<Record<(typeof ROLES)[number], SimulatedResponse>>;

function drawResponses(
  options: SimulationOptions,
  frequencies: Float64Array,
  faults: readonly PlantedFault[],
): RoleResponses[] {
  const stream = randomStream(options.seed, STREAM.responses);
  return Array.from({ length: options.units }, (_, unit) => {
    const shifting = faults.flatMap((fault): Bell[] => {
      if (fault.kind !== 'shifting resonance' || fault.unit !== unit) return [];
      // Narrow enough that of its 12 dB less than 2 are left at the ends of its band.
      const centre = Math.sqrt(fault.from * fault.to);
      const quality = (6 * centre) / (fault.to - fault.from);
      return [{ centre, quality, height: 12, shift: fault.percent / 100 }];
    });
    const withShifting = (own: SimulatedResponse) => ({ ...own, bells: [...own.bells, ...shifting] });
    const emit = withShifting(drawResponse(stream, frequencies));
    const receive = options.model === 'directional' ? withShifting(drawResponse(stream, frequencies)) : emit;
    return { emit, receive };
  });
}

/** For each unit, how each partner loads it: mean 0 and standard deviation 1 over all other units. */
function drawLoadings({ units }: SimulationOptions): number[][] {
  return Array.from({ length: units }, (_, unit) => {
    const others = units - 1;
    // Evenly spread ranks, handed round so that no two units see the same order.
    const spread = Math.sqrt((others * (others + 1)) / 12);
    return Array.from({ length: units }, (_, other) => {
      if (other === unit || others < 2) return 0;
      const rank = (((other - unit + units) % units) - 1 + 3 * unit) % others;
      return (rank - (others - 1) / 2) / spread;
    });
  });
}

function seatUnits(
  options: SimulationOptions,
  frequencies: Float64Array,
  takes: readonly Planned[],
  responses: readonly RoleResponses[],
): (unit: number, seating: number) => Seated {
  const curves = smoothCurves(frequencies, options.correlation ?? 0.5);
  const stream = randomStream(options.seed, STREAM.seatings);
  // Half of a pair's reseat variance belongs to each unit.
  const share = (options.reseatScatter ?? 0) / Math.SQRT2;
  const most = takes.reduce((top, take) => Math.max(top, take.emitterSeating, take.receiverSeating), 0);
  const table = responses.map(({ emit }) =>
    // One more than anybody counts: seating 0 is that of a unit that stood there under another's name.
    Array.from({ length: most + 1 }, (): Seated => {
      const curve = curves(stream).map((value) => share * value);
      const { centreWander = 0, qualityWander = 0 } = options;
      return { curve, state: drawState(stream, emit.bells.length, centreWander, qualityWander) };
    }),
  );
  return (unit, seating) => table[unit]![seating]!;
}

function partnerCurves(options: SimulationOptions, frequencies: Float64Array, takes: readonly Planned[]) {
  const scatter = options.partnerScatter ?? 0;
  const none = new Float64Array(frequencies.length);
  if (scatter === 0) return () => none;
  const curves = smoothCurves(frequencies, options.correlation ?? 0.5);
  const table = new Map<number, Float64Array>();
  const key = (a: number, b: number) => Math.min(a, b) * options.units + Math.max(a, b);
  const stream: RandomStream = randomStream(options.seed, STREAM.partners);
  const draw = () => curves(stream).map((value) => scatter * value);
  for (const { emitter, receiver } of takes) {
    if (!table.has(key(emitter, receiver))) table.set(key(emitter, receiver), draw());
  }
  return (a: number, b: number): Float64Array => {
    // A pair that nobody planned came about by an exchanged label.
    const own = table.get(key(a, b)) ?? draw();
    table.set(key(a, b), own);
    return own;
  };
}

function truthOf(options: SimulationOptions, responses: readonly RoleResponses[], frequencies: Float64Array) {
  const truth = new Map<string, Float64Array>();
  responses.forEach(({ emit, receive }, unit) => {
    if (options.model === 'directional') {
      truth.set(`${unitName(unit)} emit`, levelOf(emit, frequencies, undefined, 0));
      truth.set(`${unitName(unit)} receive`, levelOf(receive, frequencies, undefined, 0));
    } else truth.set(unitName(unit), levelOf(emit, frequencies, undefined, 0));
  });
  return truth;
}
