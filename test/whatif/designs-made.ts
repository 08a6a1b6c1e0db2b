import { randomStream } from '../../src/numeric/random.ts';
import type { AssumedBand } from '../../src/whatif/assumed-scatter.ts';
import { type Design, type PlannedSeating, seatingOf, unitsNamed } from '../../src/whatif/design.ts';
import { namedUnits } from '../../src/whatif/patterns.ts';

/** One ladder for all frequencies. */
export function ladder(repeat: number, reseat: number, partner: number): AssumedBand {
  return { from: Number.NaN, to: Number.NaN, repeat, reseat, partner, assumed: [] };
}

/** Independent takes of 1 dB: what published variances are in units of. */
export const UNIT_VARIANCE = ladder(1, 0, 0);

/** A design of pairs such as `A>B`; `A>B x2` is mounted twice, `A>B r3` taken three times a seating. */
export function designOf(...pairs: string[]): Design {
  const seatings = pairs.flatMap((text): PlannedSeating[] => {
    const [pair = '', ...more] = text.split(' ');
    const [emitter = '', receiver = ''] = pair.split('>');
    const number = (sign: string) => Number(more.find((word) => word.startsWith(sign))?.slice(1) ?? 1);
    const end = (name: string) => name.split('@') as [string, string | undefined];
    const [one, other] = [end(emitter), end(receiver)];
    const seating = seatingOf(one[0], other[0], {
      emitterMount: one[1] ?? '',
      receiverMount: other[1] ?? '',
      repeats: number('r'),
    });
    return new Array<PlannedSeating>(number('x')).fill(seating);
  });
  return { name: 'made for a test', units: unitsNamed(seatings), seatings, forbidden: [] };
}

export type Graph = readonly (readonly [number, number])[];

/** Pairs of units 0 … n − 1, each once. */
export function designOfGraph(units: number, graph: Graph): Design {
  const names = namedUnits(units);
  const seatings = graph.map(([a, b]) => seatingOf(names[a]!, names[b]!));
  return { name: 'a graph', units: names, seatings, forbidden: [] };
}

export function completeGraph(n: number): [number, number][] {
  return Array.from({ length: n }, (_, i) =>
    Array.from({ length: n - 1 - i }, (__, k): [number, number] => [i, i + 1 + k]),
  ).flat();
}

export function ringGraph(n: number, first = 0): [number, number][] {
  return Array.from({ length: n }, (_, i): [number, number] => [first + i, first + ((i + 1) % n)]);
}

/** A connected design with an odd loop, unequal seatings and repeats. */
export function randomDesign(seed: number): Design {
  const stream = randomStream(seed);
  const units = 4 + stream.below(5);
  const graph = [...completeGraph(3)];
  for (let unit = 3; unit < units; unit++) graph.push([stream.below(unit), unit]);
  for (const pair of completeGraph(units)) if (stream.uniform() < 0.4) graph.push(pair);
  const names = namedUnits(units);
  const seatings = graph.flatMap(([a, b]) => {
    const [emitter, receiver] = stream.uniform() < 0.5 ? [a, b] : [b, a];
    return Array.from({ length: 1 + stream.below(3) }, () =>
      seatingOf(names[emitter]!, names[receiver]!, { repeats: 1 + stream.below(3) }),
    );
  });
  return { name: `random ${seed}`, units: names, seatings, forbidden: [] };
}
