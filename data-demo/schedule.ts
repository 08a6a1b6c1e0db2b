/** One take as it stands in the crew's notes. */
export interface PlannedTake {
  readonly emitter: string;
  readonly receiver: string;
  readonly session: 'morning' | 'afternoon';
  /** Seatings of a sensor are counted through the day. */
  readonly emitterSeating: number;
  readonly receiverSeating: number;
  readonly repeat: number;
}

/** Every pair once, each sensor emitting about as often as it receives. */
function pairsOf(names: readonly string[]): [string, string][] {
  const pairs: [string, string][] = [];
  names.forEach((emitter, i) => {
    for (let ahead = 1; ahead <= names.length / 2; ahead++) {
      // Half way round, i to j and j to i are the same distance: one of the two is enough.
      if (2 * ahead === names.length && i >= ahead) continue;
      pairs.push([emitter, names[(i + ahead) % names.length]!]);
    }
  });
  return pairs;
}

/**
 * The day's takes in the order they were made. Each pair is mounted in the morning and again in the afternoon; some takes
 * are repeated as they sit, some pairs are taken the other way round as they sit, and of some only the receiver is
 * lifted and seated again.
 */
export function schedule(names: readonly string[]): PlannedTake[] {
  const seatings = new Map<string, number>();
  const seatAgain = (name: string) => {
    const next = (seatings.get(name) ?? 0) + 1;
    seatings.set(name, next);
    return next;
  };
  const takes: PlannedTake[] = [];
  for (const session of ['morning', 'afternoon'] as const) {
    const repeated = session === 'morning' ? [0, 2, 4, 6, 7] : [1, 3, 5, 8];
    pairsOf(names).forEach(([emitter, receiver], p) => {
      const emitterSeating = seatAgain(emitter);
      const receiverSeating = seatAgain(receiver);
      const take: PlannedTake = { emitter, receiver, session, emitterSeating, receiverSeating, repeat: 1 };
      takes.push(take);
      if (repeated.includes(p % 9)) takes.push({ ...take, repeat: 2 });
      if (session === 'afternoon' && p % 3 === 1) {
        takes.push({
          ...take,
          emitter: receiver,
          receiver: emitter,
          emitterSeating: receiverSeating,
          receiverSeating: emitterSeating,
        });
      }
      if (session === 'morning' && p % 4 === 3) takes.push({ ...take, receiverSeating: seatAgain(receiver) });
    });
  }
  return takes;
}
