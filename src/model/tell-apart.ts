import { nullSpace } from '../numeric/null-space.ts';
import { type Edge, partsOf } from './graph.ts';
import type { Model } from './model.ts';
import type { FreeDirection, LinkStatus, Part, Separability } from './separability.ts';

/**
 * Decides, before any numbers, what the given takes can tell apart.
 * Responses are nodes, takes are edges (see `partsOf`); free path links, which the graph does not hold, are found by the
 * rank of the incidences. A movement below `MOVES` is rounding.
 * @param takes indices of the takes that have a reading.
 * @param known links of each frequency that have a prior here.
 */
export function tellApart(model: Model, takes: readonly number[], known: ReadonlySet<number>): Separability {
  const count = model.linksPerFrequency;
  const edges = edgesOf(model, takes);
  const responses = responseLinks(model);
  const parts = partsOf(count, edges, known).filter((part) => responses.has(part.links[0]!));
  const directions = parts.filter((part) => part.sides !== undefined).map((part) => freedomOf(part, model));
  const freePaths = [...Array(count).keys()].filter((link) => model.links[link]!.kind === 'path' && !known.has(link));
  if (freePaths.length > 0) directions.push(...pathFreedoms(model, takes, known, freePaths));
  const status = Array.from({ length: count }, (_, link) => statusOf(link, directions));
  return { parts, directions, status, rank: count - directions.length };
}

const MOVES = 1e-9;

function statusOf(link: number, directions: readonly FreeDirection[]): LinkStatus {
  const moving = directions.filter((direction) => Math.abs(direction.movement[link]!) > MOVES);
  if (moving.some((direction) => direction.status === 'open')) return 'open';
  return moving.length > 0 ? 'datum' : 'ok';
}

function responseLinks(model: Model): Set<number> {
  return new Set(model.responses.map((response) => response.link));
}

function edgesOf(model: Model, takes: readonly number[]): Edge[] {
  const count = model.linksPerFrequency;
  const seen = new Set<number>();
  const edges: Edge[] = [];
  for (const take of takes) {
    const chain = model.chains[take]!;
    const ends = chain.links.filter((link) => link < count && model.links[link]!.kind === 'response');
    const edge: Edge = [ends[0]!, ends[1] ?? ends[0]!];
    const key = Math.min(...edge) * count + Math.max(...edge);
    if (!seen.has(key)) {
      seen.add(key);
      edges.push(edge);
    }
  }
  return edges;
}

// +c on one side and −c on the other leaves every sum along an edge as it is.
function freedomOf(part: Part, model: Model): FreeDirection {
  const [one, other] = part.sides!;
  const movement = new Float64Array(model.linksPerFrequency);
  for (const link of one) movement[link] = 1;
  for (const link of other) movement[link] = -1;
  // Of one emitter and one receiver only their sum is known: a convention would make numbers out of nothing.
  const tellsNothing = other.length === 0 || (part.links.length === 2 && model.datum !== 'balanced');
  const convention = tellsNothing ? undefined : datumOf(part, model, movement);
  if (convention !== undefined) return { movement, ...convention, status: 'datum' };
  const length = Math.sqrt(part.links.length);
  return { movement, restraint: movement.map((entry) => entry / length), status: 'open', convention: '' };
}

interface Convention {
  readonly restraint: Float64Array;
  readonly convention: string;
}

function datumOf(part: Part, model: Model, movement: Float64Array): Convention | undefined {
  const candidates =
    model.choice.kind === 'directional'
      ? [equalRoles(part, model), receiversAtZero(part, model)]
      : model.datum === 'balanced'
        ? [balancedSides(part, model)]
        : [];
  // A convention that the movement leaves untouched fixes nothing.
  return candidates.find(
    (candidate) => candidate !== undefined && Math.abs(dot(candidate.restraint, movement)) > MOVES,
  );
}

function equalRoles(part: Part, model: Model): Convention | undefined {
  const members = new Set(part.links);
  const coefficients = new Float64Array(model.linksPerFrequency);
  const names: string[] = [];
  for (const emit of model.responses) {
    if (emit.role !== 'emit' || !members.has(emit.link)) continue;
    const receive = model.responses.find(
      (other) => other.role === 'receive' && other.unit === emit.unit && other.mount === emit.mount,
    );
    if (receive === undefined || receive.link === emit.link || !members.has(receive.link)) continue;
    coefficients[emit.link] = coefficients[emit.link]! + 1;
    coefficients[receive.link] = coefficients[receive.link]! - 1;
    names.push(responseName(emit));
  }
  return names.length === 0
    ? undefined
    : convention(coefficients, `mean(emit − receive) = 0 dB over ${names.join(', ')}`);
}

function receiversAtZero(part: Part, model: Model): Convention | undefined {
  const members = new Set(part.links);
  const coefficients = new Float64Array(model.linksPerFrequency);
  const names: string[] = [];
  for (const response of model.responses) {
    if (response.role !== 'receive' || !members.has(response.link)) continue;
    coefficients[response.link] = 1;
    names.push(responseName(response));
  }
  return names.length === 0 ? undefined : convention(coefficients, `mean(receive) = 0 dB over ${names.join(', ')}`);
}

function balancedSides(part: Part, model: Model): Convention {
  const coefficients = new Float64Array(model.linksPerFrequency);
  const [one, other] = part.sides!;
  for (const link of one) coefficients[link] = 1 / one.length;
  for (const link of other) coefficients[link] = -1 / other.length;
  const names = (links: readonly number[]) => links.map((link) => model.links[link]!.name).join(', ');
  return convention(coefficients, `mean(${names(one)}) = mean(${names(other)})`);
}

function responseName(response: { unit: string; mount: string }): string {
  return response.mount === '' ? response.unit : `${response.unit}@${response.mount}`;
}

// Unit length, so that a restraint weighs like the readings whatever the number of units in it.
function convention(coefficients: Float64Array, text: string): Convention {
  const length = Math.sqrt(dot(coefficients, coefficients));
  return { restraint: length === 0 ? coefficients : coefficients.map((entry) => entry / length), convention: text };
}

/**
 * The freedoms in which a free path moves. In each connected stretch of the bench one of them is a matter of convention
 * (the first-named path is called 0 dB); any further one is a path that the takes cannot tell from the units.
 */
function pathFreedoms(
  model: Model,
  takes: readonly number[],
  known: ReadonlySet<number>,
  freePaths: readonly number[],
): FreeDirection[] {
  const count = model.linksPerFrequency;
  const rows = new Map<string, Float64Array>();
  for (const take of takes) {
    const chain = model.chains[take]!;
    const row = new Float64Array(count);
    chain.links.forEach((link, k) => {
      if (link < count) row[link] = chain.factors[k]!;
    });
    rows.set(row.join(), row);
  }
  for (const link of known) rows.set(`known ${link}`, unitVector(count, link));
  const basis = nullSpace([...rows.values()], count);
  const stretchOf = stretches(model, takes);
  const fixedStretches = new Set<number>();
  const freedoms: FreeDirection[] = [];
  for (const path of freePaths) {
    const at = basis.findIndex((vector) => Math.abs(vector[path]!) > MOVES);
    if (at === -1) continue;
    const [movement] = basis.splice(at, 1) as [Float64Array];
    scale(movement, 1 / movement[path]!);
    for (const other of [...basis, ...freedoms.map((freedom) => freedom.movement)]) {
      addScaled(other, movement, -other[path]!);
    }
    const stretch = stretchOf[path]!;
    // A path that no take goes over is alone in its stretch: a convention would make a number out of nothing.
    const isDatum = !fixedStretches.has(stretch) && takes.some((take) => model.chains[take]!.links.includes(path));
    fixedStretches.add(stretch);
    freedoms.push({
      movement,
      restraint: unitVector(count, path),
      status: isDatum ? 'datum' : 'open',
      convention: isDatum ? `${model.links[path]!.name} = 0 dB` : '',
    });
  }
  return freedoms;
}

// For each link the number of the connected stretch it belongs to, all links of a take being tied together.
function stretches(model: Model, takes: readonly number[]): Int32Array {
  const count = model.linksPerFrequency;
  const ties = takes.flatMap((take): Edge[] => {
    const links = model.chains[take]!.links.filter((link) => link < count);
    return links.map((link) => [links[0]!, link]);
  });
  const numbers = new Int32Array(count);
  partsOf(count, ties, new Set()).forEach((part, number) => {
    for (const link of part.links) numbers[link] = number;
  });
  return numbers;
}

function unitVector(length: number, at: number): Float64Array {
  const vector = new Float64Array(length);
  vector[at] = 1;
  return vector;
}

function dot(a: Float64Array, b: Float64Array): number {
  return a.reduce((sum, entry, i) => sum + entry * b[i]!, 0);
}

function scale(vector: Float64Array, factor: number): void {
  for (let i = 0; i < vector.length; i++) vector[i] = vector[i]! * factor;
}

function addScaled(target: Float64Array, vector: Float64Array, factor: number): void {
  for (let i = 0; i < target.length; i++) target[i] = target[i]! + factor * vector[i]!;
}
