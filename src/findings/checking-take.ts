import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ExtraTake } from './examination.ts';

/**
 * The take that would check a take which nothing checks: one end of it, that with fewer partners first,
 * against the unit tied to the most others that it was not yet paired with; where it was paired with all, the same pair
 * mounted again.
 */
export function checkingTake(set: TakeSet, model: Model, take: number): ExtraTake {
  const { emitter, receiver, path } = set.takes[take]!;
  const partners = partnersOf(set);
  const canEmit = new Set(model.responses.filter(({ role }) => role !== 'receive').map(({ unit }) => unit));
  const canReceive = new Set(model.responses.filter(({ role }) => role !== 'emit').map(({ unit }) => unit));
  const byTies = [...partners.keys()].sort((a, b) => partners.get(b)!.size - partners.get(a)!.size);
  const ends = [
    { unit: emitter, partner: (other: string) => ({ emitter, receiver: other, path }), fits: canReceive },
    { unit: receiver, partner: (other: string) => ({ emitter: other, receiver, path }), fits: canEmit },
  ].sort((a, b) => partners.get(a.unit)!.size - partners.get(b.unit)!.size);
  for (const { unit, partner, fits } of ends) {
    const other = byTies.find(
      (candidate) => candidate !== unit && fits.has(candidate) && !partners.get(unit)!.has(candidate),
    );
    if (other !== undefined) return partner(other);
  }
  return { emitter, receiver, path };
}

function partnersOf(set: TakeSet): Map<string, Set<string>> {
  const partners = new Map<string, Set<string>>();
  for (const { emitter, receiver } of set.takes) {
    for (const [one, other] of [
      [emitter, receiver],
      [receiver, emitter],
    ] as const) {
      partners.set(one, (partners.get(one) ?? new Set()).add(other));
    }
  }
  return partners;
}
