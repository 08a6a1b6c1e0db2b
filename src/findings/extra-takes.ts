import type { Model } from '../model/model.ts';
import type { Part, Pattern } from '../model/separability.ts';
import { type ExtraTake, THIRD_UNIT } from './examination.ts';

/**
 * The fewest extra takes that give a reciprocal part without an odd loop its levels:
 * one between two units of the same side, since that closes an odd loop; for a lone pair or a single unit one to a unit of
 * a solvable part; where there is no such part, a further unit against both.
 */
export function takesForOpenPart(model: Model, pattern: Pattern, part: Part): ExtraTake[] {
  const sides = part.sides!;
  const side = [...sides].sort((a, b) => b.length - a.length)[0]!;
  const counts = takeCounts(model, pattern);
  const wellTied = (links: readonly number[]) => [...links].sort((a, b) => counts[b]! - counts[a]! || a - b);
  if (side.length >= 2) {
    // Two units of the larger side that are tied to the most others: the shortest new loop and the steadiest one.
    const [one, other] = wellTied(side).slice(0, 2) as [number, number];
    return [take(model, Math.min(one, other), Math.max(one, other))];
  }
  const solvable = pattern.separability.parts.find((candidate) => candidate.sides === undefined);
  if (solvable !== undefined) return [take(model, part.links[0]!, wellTied(solvable.links)[0]!)];
  const other = pattern.separability.parts.find((candidate) => candidate !== part);
  const third = other === undefined ? THIRD_UNIT : model.links[wellTied(other.links)[0]!]!.name;
  return part.links.map((link) => ({ emitter: model.links[link]!.name, receiver: third, path: '' }));
}

/** One take that ties two parts of a directional set together; undefined where there is no second part. */
export function takeToJoin(model: Model, pattern: Pattern, part: Part): ExtraTake | undefined {
  const counts = takeCounts(model, pattern);
  const best = (links: readonly number[], role: 'emit' | 'receive') =>
    links
      .filter((link) => model.responses.some((response) => response.link === link && response.role === role))
      .sort((a, b) => counts[b]! - counts[a]! || a - b)[0];
  for (const other of pattern.separability.parts) {
    if (other === part) continue;
    const forth = [best(part.links, 'emit'), best(other.links, 'receive')] as const;
    const back = [best(other.links, 'emit'), best(part.links, 'receive')] as const;
    for (const [emit, receive] of [forth, back]) {
      if (emit !== undefined && receive !== undefined) {
        return { emitter: unitName(model, emit, 'emit'), receiver: unitName(model, receive, 'receive'), path: '' };
      }
    }
  }
  return undefined;
}

/** A pair that was taken over another path, to be taken over this one as well; undefined where every pair was. */
export function takeOverPath(
  model: Model,
  pattern: Pattern,
  takes: readonly { readonly emitter: string; readonly receiver: string; readonly path: string }[],
  path: number,
): ExtraTake | undefined {
  const label = model.links[path]!.name.replace(/^path /, '');
  const pairs = (over: boolean) =>
    pattern.takes
      .filter((t) => model.chains[t]!.links.includes(path) === over)
      .map((t) => ({ emitter: takes[t]!.emitter, receiver: takes[t]!.receiver, path: label }));
  const done = new Set(pairs(true).map((pair) => JSON.stringify(pair)));
  return pairs(false).find((pair) => !done.has(JSON.stringify(pair)));
}

function take(model: Model, one: number, other: number): ExtraTake {
  return { emitter: model.links[one]!.name, receiver: model.links[other]!.name, path: '' };
}

function unitName(model: Model, link: number, role: 'emit' | 'receive'): string {
  const response = model.responses.find((candidate) => candidate.link === link && candidate.role === role)!;
  return response.mount === '' ? response.unit : `${response.unit}@${response.mount}`;
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
