import type { Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { FreeDirection, Pattern } from '../model/separability.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ExtraTake, OpenFinding } from './examination.ts';
import { takeOverPath, takesForOpenPart, takesToJoin } from './extra-takes.ts';

/** A movement below this is rounding. */
const MOVES = 1e-9;

/**
 * What cannot be told apart, and the cheapest extra takes that would cure it. The same freedom at several frequencies,
 * with the same cure, is one finding. Open ones come first.
 */
export function openFindings(set: TakeSet, model: Model, { patterns }: Patterns): OpenFinding[] {
  const found = new Map<string, { finding: OpenFinding; frequencies: number[] }>();
  for (const pattern of patterns) {
    for (const direction of pattern.separability.directions) {
      const finding = findingOf(set, model, pattern, direction);
      const key = JSON.stringify(finding);
      const same = found.get(key);
      if (same === undefined) found.set(key, { finding, frequencies: [...pattern.frequencies] });
      else same.frequencies.push(...pattern.frequencies);
    }
  }
  return [...found.values()]
    .map(({ finding, frequencies }) => ({ ...finding, frequencies: frequencies.sort((a, b) => a - b) }))
    .sort((a, b) => Number(a.status === 'datum') - Number(b.status === 'datum'));
}

function findingOf(set: TakeSet, model: Model, pattern: Pattern, direction: FreeDirection): OpenFinding {
  const moving = movingLinks(direction);
  const names = (links: readonly number[]) => links.map((link) => model.links[link]!.name);
  const common = { status: direction.status, convention: direction.convention, frequencies: [] };
  const path = moving.find((link) => model.links[link]!.kind === 'path' && direction.restraint[link] === 1);
  if (path !== undefined) {
    const extra = direction.status === 'open' ? takeOverPath(model, pattern, set.takes, path) : undefined;
    const kind = isUnmeasured(model, pattern, moving) ? 'not measured' : 'path';
    return { ...common, kind, responses: names(moving), sides: undefined, extraTakes: listOf(extra) };
  }
  const part = pattern.separability.parts.find((candidate) => candidate.links.includes(moving[0]!))!;
  const sides = part.sides!;
  const both = [names(sides[0]), names(sides[1])] as const;
  if (model.choice.kind === 'directional') {
    const kind = part.links.length === 1 ? 'not measured' : 'one constant';
    return { ...common, kind, responses: names(moving), sides: both, extraTakes: takesToJoin(model, pattern, part) };
  }
  return {
    ...common,
    kind: isUnmeasured(model, pattern, part.links) ? 'not measured' : 'no odd loop',
    responses: names(moving),
    sides: both,
    extraTakes: takesForOpenPart(model, pattern, part),
  };
}

function movingLinks(direction: FreeDirection): number[] {
  return [...direction.movement.keys()].filter((link) => Math.abs(direction.movement[link]!) > MOVES);
}

function isUnmeasured(model: Model, pattern: Pattern, links: readonly number[]): boolean {
  return links.length === 1 && !pattern.takes.some((t) => model.chains[t]!.links.includes(links[0]!));
}

function listOf(extra: ExtraTake | undefined): ExtraTake[] {
  return extra === undefined ? [] : [extra];
}
