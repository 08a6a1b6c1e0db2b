import type { Take, TakeSet } from './take-set.ts';

/**
 * Groups of at least two takes that differ in nothing but the repeat: same emitter and receiver, path, session, mounts
 * and seatings. Where no seating is given, each pair in each session counts as one seating of each of its units.
 * Entries are indices into the takes, ascending.
 */
export function repeatGroups(set: TakeSet): number[][] {
  const groups = new Map<string, number[]>();
  set.takes.forEach((take, index) => {
    const key = seatedPairKey(take);
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [index]);
    else group.push(index);
  });
  return [...groups.values()].filter((group) => group.length > 1);
}

function seatedPairKey(take: Take): string {
  return JSON.stringify([
    take.emitter,
    take.receiver,
    take.path,
    take.session,
    take.emitterMount,
    take.receiverMount,
    take.emitterSeating,
    take.receiverSeating,
  ]);
}
