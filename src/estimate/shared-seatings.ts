import type { Patterns } from '../model/find-patterns.ts';
import type { Chain, Link, Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ChainLayout } from './chain-groups.ts';
import type { ScatterOfUses } from './reading-scatter.ts';
import type { Solution } from './solution.ts';

/** One seating of a unit in one role of its response that serves several pairs, or several seatings of its partner. */
export interface SharedSeating {
  readonly name: string;
  /** Response link that it belongs to. */
  readonly response: number;
}

/** Which takes share seatings beyond one seating of one pair. */
export interface SharedSeatings {
  readonly seatings: readonly SharedSeating[];
  /** For each take the shared seatings in it; the same one twice where it is at both ends. */
  readonly ofTake: readonly (readonly number[])[];
  /** For each seating of the layout the response links of the ends that are seated for it alone. */
  readonly ownEnds: readonly (readonly number[])[];
}

/**
 * Finds seatings that serve more than one seating of a pair, by their labels: a unit that stays mounted while its partner
 * is mounted anew, or that is measured against several partners. A unit without a label counts as mounted anew for each
 * pair in each session.
 */
export function sharedSeatings(
  set: TakeSet,
  model: Model,
  layout: Pick<ChainLayout, 'chainOfSeat' | 'seatOf' | 'takes'>,
): SharedSeatings {
  const served = new Map<string, Set<string>>();
  const ends = set.takes.map((_, t) => endsOf(set, model, t));
  ends.forEach((both, t) => {
    both.forEach(({ key }, k) => {
      if (key === '') return;
      const other = both[1 - k]!;
      const seats = served.get(key) ?? new Set();
      served.set(key, seats.add(`${layout.chainOfSeat[layout.seatOf[t]!]} ${other.response} ${other.key}`));
    });
  });
  const numbers = new Map<string, number>();
  const seatings: SharedSeating[] = [];
  const numberOf = ({ key, response, name }: End): number | undefined => {
    if ((served.get(key)?.size ?? 0) < 2) return undefined;
    const known = numbers.get(key) ?? seatings.length;
    if (known === seatings.length) seatings.push({ name, response });
    numbers.set(key, known);
    return known;
  };
  const ofTake = ends.map((both) => both.flatMap((end) => numberOf(end) ?? []));
  const ownEnds = layout.takes.map((takes) =>
    ends[takes[0]!]!.filter((end) => numberOf(end) === undefined).map(({ response }) => response),
  );
  return { seatings, ofTake, ownEnds };
}

interface End {
  /** Empty where the seating has no label. */
  readonly key: string;
  readonly response: number;
  readonly name: string;
}

function endsOf(set: TakeSet, model: Model, t: number): [End, End] {
  const take = set.takes[t]!;
  const responses = model.chains[t]!.links.filter((link) => model.links[link]!.kind === 'response');
  const end = (unit: string, seating: string, response: number): End => ({
    key: seating === '' ? '' : JSON.stringify([unit, seating, response]),
    response,
    name: `${model.links[response]!.name} seating ${seating}`,
  });
  return [
    end(take.emitter, take.emitterSeating, responses[0]!),
    end(take.receiver, take.receiverSeating, responses.at(-1)!),
  ];
}

/**
 * The model with each shared seating as one more link of each frequency, drawn at random around 0.
 * @param deviation F × seatings, standard deviation in dB, above 0: entry (f, s) at f · seatings + s.
 */
export function withSeatingLinks(model: Model, { seatings, ofTake }: SharedSeatings, deviation: Float64Array): Model {
  const n = model.linksPerFrequency;
  const count = seatings.length;
  const width = deviation.length / count;
  const links = seatings.map(
    ({ name }, s): Link => ({
      name,
      kind: 'seating',
      scope: 'each frequency',
      prior: {
        kind: 'random',
        value: new Float64Array(width),
        uncertainty: Float64Array.from({ length: width }, (_, f) => deviation[f * count + s]!),
      },
    }),
  );
  const chains = model.chains.map((chain, t): Chain => {
    const extra = new Map<number, number>();
    for (const s of ofTake[t]!) extra.set(n + s, (extra.get(n + s) ?? 0) + 1);
    return {
      ...chain,
      links: [...chain.links.map((link) => (link < n ? link : link + count)), ...extra.keys()],
      factors: [...chain.factors, ...extra.values()],
    };
  });
  return {
    ...model,
    links: [...model.links.slice(0, n), ...links, ...model.links.slice(n)],
    linksPerFrequency: n + count,
    chains,
  };
}

/** The same patterns for a model with `count` more links, all of which have a prior: what was open stays open, and nothing else. */
export function withMoreLinks({ patterns, patternOf }: Patterns, count: number): Patterns {
  const longer = (values: Float64Array) => {
    const padded = new Float64Array(values.length + count);
    padded.set(values);
    return padded;
  };
  return {
    patternOf,
    patterns: patterns.map((pattern) => ({
      ...pattern,
      separability: {
        ...pattern.separability,
        status: [...pattern.separability.status, ...new Array<'ok'>(count).fill('ok')],
        directions: pattern.separability.directions.map((direction) => ({
          ...direction,
          movement: longer(direction.movement),
          restraint: longer(direction.restraint),
        })),
      },
    })),
  };
}

/** Longer rows for the links of seatings, of which nothing is to be said. */
export function paddedUses(uses: ScatterOfUses, n: number, count: number): ScatterOfUses {
  const longer = (values: Float64Array) => {
    const width = values.length / n;
    const padded = new Float64Array(width * (n + count)).fill(Number.NaN);
    for (let f = 0; f < width; f++) padded.set(values.subarray(f * n, (f + 1) * n), f * (n + count));
    return padded;
  };
  const { seating, seatingDof, partner, partnerDof, dof } = uses;
  return {
    seating: longer(seating),
    seatingDof: longer(seatingDof),
    partner: longer(partner),
    partnerDof: longer(partnerDof),
    dof: longer(dof),
  };
}

/**
 * A solution with seating links as one of the other links alone. Residuals are those of the responses: what a seating was
 * found to be stays in them, as it does for seatings that are not shared. What the seatings did to covariances stays beside
 * them as `wide`.
 */
export function withoutSeatingLinks(solution: Solution, n: number, { seatings, ofTake }: SharedSeatings): Solution {
  const count = seatings.length;
  const wide = n + count;
  const width = solution.patternOf.length;
  const residuals = solution.residuals.map((residual, cell) => {
    const f = cell % width;
    const own = ofTake[Math.floor(cell / width)]!;
    return own.reduce((sum, s) => sum + solution.estimates[f * wide + n + s]!, residual);
  });
  const cut = <Values extends Float64Array | Uint8Array>(values: Values): Values => {
    const kept = values.slice(0, (values.length / wide) * n) as Values;
    for (let f = 0; f < values.length / wide; f++) kept.set(values.subarray(f * wide, f * wide + n), f * n);
    return kept;
  };
  const corner = (matrix: Float64Array) => {
    const kept = new Float64Array(n * n);
    for (let i = 0; i < n; i++) kept.set(matrix.subarray(i * wide, i * wide + n), i * n);
    return kept;
  };
  return {
    ...solution,
    residuals,
    estimates: cut(solution.estimates),
    uncertainty: cut(solution.uncertainty),
    dof: cut(solution.dof),
    reseatUncertainty: cut(solution.reseatUncertainty),
    partnerUncertainty: cut(solution.partnerUncertainty),
    reseatDof: cut(solution.reseatDof),
    partnerDof: cut(solution.partnerDof),
    status: cut(solution.status),
    covariance: solution.covariance.map((block) => ({
      ...block,
      matrix: corner(block.matrix),
      common: block.common && corner(block.common),
      ofGains: block.ofGains && corner(block.ofGains),
      reaching: block.reaching?.map(({ effect, shifts }) => ({ effect, shifts: shifts.slice(0, n) })) ?? [],
      wide: block.matrix,
    })),
    gains: solution.gains.map((gain) => ({ ...gain, link: gain.link - count })),
  };
}
