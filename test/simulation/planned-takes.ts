import type { Take } from '../../src/takes/take-set.ts';
import type { SimulationOptions } from './simulation-options.ts';

/** A take as planned: indices of the units, and which mounting it belongs to. */
export interface Planned {
  readonly emitter: number;
  readonly receiver: number;
  /** Rounds through all pairs, from 0. */
  readonly round: number;
  readonly repeat: number;
  /** Counted for each unit, from 1. */
  readonly emitterSeating: number;
  readonly receiverSeating: number;
}

/** The takes in the order that `simulatePairs` states. */
export function planTakes(options: SimulationOptions): Planned[] {
  const { units, seatings = 1, repeats = 1, mounted = 'for each pair' } = options;
  const pairs = options.pairs ?? allPairs(units);
  const mountings = new Int32Array(units);
  const takes: Planned[] = [];
  for (let round = 0; round < seatings; round++) {
    if (mounted === 'for each round') mountings.fill(round + 1);
    for (const [emitter, receiver] of pairs) {
      if (mounted === 'for each pair') {
        for (const unit of new Set([emitter, receiver])) mountings[unit] = mountings[unit]! + 1;
      }
      const [emitterSeating, receiverSeating] = [mountings[emitter]!, mountings[receiver]!];
      for (let repeat = 0; repeat < repeats; repeat++) {
        const there: Planned = { emitter, receiver, round, repeat, emitterSeating, receiverSeating };
        takes.push(there);
        if (!options.bothWays) continue;
        takes.push({
          ...there,
          emitter: receiver,
          receiver: emitter,
          emitterSeating: receiverSeating,
          receiverSeating: emitterSeating,
        });
      }
    }
  }
  return takes;
}

function allPairs(units: number): [number, number][] {
  const pairs: [number, number][] = [];
  for (let i = 0; i < units; i++) for (let j = i + 1; j < units; j++) pairs.push([i, j]);
  return pairs;
}

/** `U01` and so on. */
export function unitName(unit: number): string {
  return `U${String(unit + 1).padStart(2, '0')}`;
}

/** What a file would say of a take. */
export function takeRecord(
  take: Planned,
  index: number,
  count: number,
  width: number,
  options: SimulationOptions,
): Take {
  const bySessions = options.labels === 'sessions';
  return {
    id: `T${String(index + 1).padStart(Math.max(3, String(count).length), '0')}`,
    file: 'simulated.csv',
    line: 2 + index * width,
    emitter: unitName(take.emitter),
    receiver: unitName(take.receiver),
    path: '',
    session: bySessions ? `round ${take.round + 1}` : '',
    emitterMount: '',
    receiverMount: '',
    emitterSeating: bySessions ? '' : String(take.emitterSeating),
    receiverSeating: bySessions ? '' : String(take.receiverSeating),
    repeat: String(take.repeat + 1),
    takenAt: '',
    distance: undefined,
    note: '',
  };
}
