import { partsOf } from '../model/graph.ts';
import type { WalkPlan } from './mounting-walk.ts';

/**
 * A number of mountings below which no order can get: every seating after the first of its connected part needs a fresh
 * unit at least, but for a pair that is only turned round, and the first one of each part one more.
 */
export function fewestMountings({ emitter, receiver, places }: WalkPlan): number {
  const edges = Array.from(emitter, (one, k): [number, number] => [one, receiver[k]!]);
  const ways = new Map<string, [number, number]>();
  let steps = 0;
  for (const [one, other] of edges) {
    if (one === other) continue;
    steps++;
    const key = `${Math.min(one, other)} ${Math.max(one, other)}`;
    const counts = ways.get(key) ?? [0, 0];
    counts[one < other ? 0 : 1]++;
    ways.set(key, counts);
  }
  const turned = [...ways.values()].reduce((sum, [there, back]) => sum + Math.min(there, back), 0);
  return steps - turned + partsOf(places, edges, new Set()).length;
}
