import { knownLinks } from '../model/find-patterns.ts';
import type { Model, Response } from '../model/model.ts';
import type { Part, Pattern } from '../model/separability.ts';
import { tellApart } from '../model/tell-apart.ts';
import type { Take } from '../takes/take-set.ts';
import { type ExtraTake, THIRD_UNIT } from './examination.ts';

/**
 * The fewest extra takes that give a reciprocal part without an odd loop its levels:
 * one between two units of the same side, or between two look-alikes, since that closes an odd loop; for a lone pair or a
 * single unit one to a unit of a solvable part; where there is no such part, three units against each other.
 * A unit is never asked to stand against itself, unless it was taken so before.
 */
export function takesForOpenPart(model: Model, pattern: Pattern, part: Part): ExtraTake[] {
  const counts = takeCounts(model, pattern);
  const wellTied = (links: readonly number[]) => [...links].sort((a, b) => counts[b]! - counts[a]! || a - b);
  const sides = [...part.sides!].sort((a, b) => b.length - a.length);
  // Units of the larger side that are tied to the most others: the shortest new loop and the steadiest one.
  const within = firstOf(sides.flatMap((side) => pairsOf(wellTied(side))).map((pair) => between(model, ...pair)));
  if (within !== undefined) return [within];
  const twin = firstOf(part.links.map((link) => between(model, link, link)));
  if (twin !== undefined) return [twin];
  const solvable = pattern.separability.parts.find((candidate) => candidate.sides === undefined);
  const toSolvable =
    solvable &&
    firstOf(part.links.flatMap((link) => wellTied(solvable.links).map((other) => between(model, link, other))));
  if (toSolvable !== undefined) return [toSolvable];
  const others = wellTied(
    pattern.separability.parts.flatMap(({ links }) => (part.links.includes(links[0]!) ? [] : links)),
  );
  return triangle(model, pattern, part, others);
}

/** The takes that complete a triangle: a further unit against both ends of a take, or three takes where there is none. */
function triangle(model: Model, pattern: Pattern, part: Part, others: readonly number[]): ExtraTake[] {
  const edges = tiedPairs(model, pattern);
  const own = edges.find(([a]) => part.links.includes(a));
  if (own !== undefined) {
    const third = others.find((other) => own.every((end) => between(model, end, other) !== undefined));
    return own.map((end) => withThird(model, end, third));
  }
  const unit = part.links[0]!;
  const free = others.filter((other) => between(model, unit, other) !== undefined);
  const tied = edges.find((ends) => ends.every((end) => free.includes(end)));
  if (tied !== undefined) return tied.map((end) => between(model, unit, end)!);
  const second = free[0];
  if (second === undefined) return listOf(selfTake(model, unit));
  const third = free.find((other) => between(model, second, other) !== undefined);
  return [between(model, unit, second)!, withThird(model, unit, third), withThird(model, second, third)];
}

function withThird(model: Model, end: number, third: number | undefined): ExtraTake {
  if (third !== undefined) return between(model, end, third)!;
  return { emitter: nameOf(responsesOf(model, end)[0]!), receiver: THIRD_UNIT, path: '' };
}

/**
 * The takes that tie a directional part to another one: one, or two where one alone would leave no more than an emitter
 * and a receiver together, of which only the sum is known. Empty where there is no second part that it can be tied to.
 */
export function takesToJoin(model: Model, pattern: Pattern, part: Part): ExtraTake[] {
  // A part that is solved already gives its levels, a large one steadies them.
  const isSolved = ({ sides }: Part) => Number(sides === undefined);
  const others = pattern.separability.parts
    .filter((other) => other !== part)
    .sort((a, b) => isSolved(b) - isSolved(a) || b.links.length - a.links.length);
  const first = joinOf(model, pattern, part.links, others);
  if (first === undefined) return [];
  const links = [...part.links, ...first.other.links];
  if (links.length > 2 || isSolved(first.other)) return [first.take];
  const rest = others.filter((other) => other !== first.other);
  return [first.take, ...listOf(joinOf(model, pattern, links, rest)?.take)];
}

function joinOf(model: Model, pattern: Pattern, links: readonly number[], others: readonly Part[]) {
  const counts = takeCounts(model, pattern);
  const inRole = (members: readonly number[], role: 'emit' | 'receive') =>
    [...members]
      .sort((a, b) => counts[b]! - counts[a]! || a - b)
      .flatMap((link) => responsesOf(model, link).filter((response) => response.role === role));
  const join = (from: readonly number[], to: readonly number[]) =>
    firstOf(inRole(from, 'emit').flatMap((emit) => inRole(to, 'receive').map((receive) => takeOf(emit, receive))));
  for (const other of others) {
    const take = join(links, other.links) ?? join(other.links, links);
    if (take !== undefined) return { take, other };
  }
  return undefined;
}

/**
 * A pair that was taken over another path, to be taken over this one as well, such that the path can then be told apart
 * and nothing else is lost; undefined where no pair does that.
 */
export function takeOverPath(
  model: Model,
  pattern: Pattern,
  takes: readonly Take[],
  path: number,
): ExtraTake | undefined {
  const label = model.links[path]!.name.replace(/^path /, '');
  const pairOver = (t: number): ExtraTake => {
    const { emitter, emitterMount, receiver, receiverMount } = takes[t]!;
    return { emitter: placed(emitter, emitterMount), receiver: placed(receiver, receiverMount), path: label };
  };
  const isOver = (t: number) => model.chains[t]!.links.includes(path);
  const tried = new Set(pattern.takes.filter(isOver).map((t) => JSON.stringify(pairOver(t))));
  for (const t of pattern.takes) {
    const key = JSON.stringify(pairOver(t));
    if (tried.has(key)) continue;
    tried.add(key);
    if (settlesPath(model, pattern, t, path)) return pairOver(t);
  }
  return undefined;
}

function settlesPath(model: Model, { takes, frequencies, separability }: Pattern, like: number, path: number): boolean {
  const ends = model.chains[like]!;
  const kept = ends.links.map((_, k) => k).filter((k) => model.links[ends.links[k]!]!.kind === 'response');
  const chain = {
    links: [...kept.map((k) => ends.links[k]!), path],
    factors: [...kept.map((k) => ends.factors[k]!), 1],
    known: undefined,
  };
  const known = new Set(knownLinks(model, frequencies[0]!));
  const after = tellApart({ ...model, chains: [...model.chains, chain] }, [...takes, model.chains.length], known);
  return (
    after.status[path] !== 'open' && after.status.every((s, link) => s !== 'open' || separability.status[link] === s)
  );
}

function pairsOf(links: readonly number[]): [number, number][] {
  return links.flatMap((a, i) => links.slice(i + 1).map((b): [number, number] => [Math.min(a, b), Math.max(a, b)]));
}

/** Pairs of different responses that have a take between them. */
function tiedPairs(model: Model, pattern: Pattern): (readonly [number, number])[] {
  return pattern.takes.flatMap((t) => {
    const [a, b] = model.chains[t]!.links.filter((link) => model.links[link]!.kind === 'response');
    return a === undefined || b === undefined ? [] : [[a, b] as const];
  });
}

/** A take between two responses; undefined where all their units are one and the same. */
function between(model: Model, one: number, other: number): ExtraTake | undefined {
  return firstOf(
    responsesOf(model, one).flatMap((emit) => responsesOf(model, other).map((receive) => takeOf(emit, receive))),
  );
}

function selfTake(model: Model, link: number): ExtraTake | undefined {
  const isTaken = model.chains.some(({ links, factors }) => links[0] === link && factors[0] === 2);
  const name = nameOf(responsesOf(model, link)[0]!);
  return isTaken ? { emitter: name, receiver: name, path: '' } : undefined;
}

function takeOf(emit: Response, receive: Response): ExtraTake | undefined {
  if (emit.unit === receive.unit) return undefined;
  return { emitter: nameOf(emit), receiver: nameOf(receive), path: '' };
}

function responsesOf(model: Model, link: number): Response[] {
  return model.responses.filter((response) => response.link === link);
}

function nameOf({ unit, mount }: Response): string {
  return placed(unit, mount);
}

function placed(unit: string, mount: string): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}

function firstOf<T>(values: readonly (T | undefined)[]): T | undefined {
  return values.find((value) => value !== undefined);
}

function listOf(take: ExtraTake | undefined): ExtraTake[] {
  return take === undefined ? [] : [take];
}

/** Number of takes with a reading that touch each link. */
function takeCounts(model: Model, pattern: Pattern): Int32Array {
  const counts = new Int32Array(model.linksPerFrequency);
  for (const t of pattern.takes) {
    for (const link of model.chains[t]!.links) {
      if (link < counts.length) counts[link] = counts[link]! + 1;
    }
  }
  return counts;
}
