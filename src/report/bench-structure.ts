import { placedUnit } from './response-name.ts';
import type { Inspection } from './result.ts';

/** How one unit, in one mount, stands in the takes. */
export interface UnitStructure {
  readonly unit: string;
  readonly mount: string;
  readonly emits: number;
  readonly receives: number;
  /** Different units at the other end. */
  readonly partners: number;
  /** Frequencies by status, the worse of its roles. */
  readonly frequencies: { readonly ok: number; readonly datum: number; readonly open: number };
}

/** Units as they are first named among the responses. */
export function unitStructures({ set, model, patterns }: Inspection): UnitStructure[] {
  const links = new Map<string, { unit: string; mount: string; links: number[] }>();
  for (const response of model.responses) {
    const key = JSON.stringify([response.unit, response.mount]);
    const entry = links.get(key) ?? { unit: response.unit, mount: response.mount, links: [] };
    entry.links.push(response.link);
    links.set(key, entry);
  }
  return [...links.values()].map(({ unit, mount, links: own }) => {
    const emitting = set.takes.filter((take) => take.emitter === unit && take.emitterMount === mount);
    const receiving = set.takes.filter((take) => take.receiver === unit && take.receiverMount === mount);
    const partners = [...emitting.map((take) => take.receiver), ...receiving.map((take) => take.emitter)];
    const frequencies = { ok: 0, datum: 0, open: 0 };
    for (const { separability, frequencies: concerned } of patterns.patterns) {
      const statuses = own.map((link) => separability.status[link]!);
      const worst = statuses.includes('open') ? 'open' : statuses.includes('datum') ? 'datum' : 'ok';
      frequencies[worst] += concerned.length;
    }
    return {
      unit,
      mount,
      emits: emitting.length,
      receives: receiving.length,
      partners: new Set(partners.filter((partner) => partner !== unit)).size,
      frequencies,
    };
  });
}

/** Takes a session, in the order sessions are first named; an empty name where none is given. */
export function sessionCounts({ set }: Pick<Inspection, 'set'>): { session: string; takes: number }[] {
  const counts = new Map<string, number>();
  for (const { session } of set.takes) counts.set(session, (counts.get(session) ?? 0) + 1);
  return [...counts].map(([session, takes]) => ({ session, takes }));
}

/** Seatings as far as they are given. */
interface SeatingCounts {
  /** Takes with a seating for at least one of their units. */
  readonly takes: number;
  /** Different seatings named, over all units. */
  readonly seatings: number;
}

export function seatingCounts({ set }: Pick<Inspection, 'set'>): SeatingCounts {
  const seatings = new Set<string>();
  let takes = 0;
  for (const take of set.takes) {
    const ends = [
      { unit: take.emitter, mount: take.emitterMount, seating: take.emitterSeating },
      { unit: take.receiver, mount: take.receiverMount, seating: take.receiverSeating },
    ].filter((end) => end.seating !== '');
    if (ends.length > 0) takes++;
    for (const end of ends) seatings.add(JSON.stringify([placedUnit(end), end.seating]));
  }
  return { takes, seatings: seatings.size };
}

/** Takes that reach over the same frequencies. */
interface RangeGroup {
  /** Hertz; NaN for takes without a reading. */
  readonly from: number;
  readonly to: number;
  readonly readings: number;
  /** Ids. */
  readonly takes: readonly string[];
}

/** Takes grouped by their lowest and highest frequency and number of readings, in order of first appearance. */
export function rangeGroups({ set }: Pick<Inspection, 'set'>): RangeGroup[] {
  const width = set.frequencies.length;
  const groups = new Map<string, { from: number; to: number; readings: number; takes: string[] }>();
  set.takes.forEach((take, t) => {
    const levels = set.levels.subarray(t * width, (t + 1) * width);
    const measured = [...levels.keys()].filter((f) => !Number.isNaN(levels[f]!));
    const from = set.frequencies[measured[0] ?? -1] ?? Number.NaN;
    const to = set.frequencies[measured.at(-1) ?? -1] ?? Number.NaN;
    const key = `${from} ${to} ${measured.length}`;
    const group = groups.get(key) ?? { from, to, readings: measured.length, takes: [] };
    group.takes.push(take.id);
    groups.set(key, group);
  });
  return [...groups.values()];
}
