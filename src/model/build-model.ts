import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { chooseModel } from './choose-model.ts';
import { classesOf, type UnitClasses } from './lookalikes.ts';
import type { Chain, Link, Model, ModelChoice, Prior, Response, Role } from './model.ts';
import type { ModelOptions } from './model-options.ts';
import { pathTerms } from './path-terms.ts';
import { referencePriors } from './reference-priors.ts';
import { unknownUnit } from './unknown-unit.ts';

/**
 * Sets up what explains the takes: one response a unit and mount (reciprocal) or one for each of its roles (directional),
 * path levels, loose gains.
 * - With a single path label, or none, the path is part of every level; with several, each is a link.
 * - Look-alikes share a response; a unit against itself or its look-alike counts it twice.
 * - A reversible unit has emit = receive + J within the directional model; J = 0.
 * @throws InputError where the options name units, paths or roles that the takes do not have.
 */
export function buildModel(set: TakeSet, options: ModelOptions): Model {
  const choice = chooseModel(set, options);
  const faults: InputFault[] = [];
  const classes = classesOf(set, options.lookalikes, faults);
  const nodes = responseNodes(set, choice, options.reversible, classes, faults);
  const paths = pathTerms(set, options.path, faults);
  const priors = referencePriors(set, choice, nodes.responses, options.references, faults);
  if (faults.length > 0) throw new InputError(faults);

  const links: Link[] = [
    ...nodes.names.map((name, link) => eachFrequency(name, 'response', priors.get(link))),
    ...paths.links.map(({ name, prior }) => eachFrequency(name, 'path', prior)),
  ];
  const linksPerFrequency = links.length;
  const sessions = options.looseGain ? [...new Set(set.takes.map((take) => take.session))] : [];
  for (const session of sessions) {
    const name = session === '' ? 'gain' : `gain ${session}`;
    links.push({ name, kind: 'gain', scope: 'all frequencies', prior: undefined });
  }
  const chains = set.takes.map((take, t): Chain => {
    const entries: [number, number][] = [];
    const emit = nodes.linkOf(take.emitter, take.emitterMount, 'emit');
    const receive = nodes.linkOf(take.receiver, take.receiverMount, 'receive');
    if (emit === receive) entries.push([emit, 2]);
    else entries.push([emit, 1], [receive, 1]);
    const path = paths.linkOf[t]!;
    if (path >= 0) entries.push([nodes.names.length + path, 1]);
    if (options.looseGain) entries.push([linksPerFrequency + sessions.indexOf(take.session), 1]);
    return {
      links: entries.map(([link]) => link),
      factors: entries.map(([, factor]) => factor),
      known: paths.known[t],
    };
  });
  return { choice, links, linksPerFrequency, chains, responses: nodes.responses, datum: options.datum };
}

function eachFrequency(name: string, kind: 'response' | 'path', prior: Prior | undefined): Link {
  return { name, kind, scope: 'each frequency', prior };
}

interface ResponseNodes {
  /** Name of each response link. */
  readonly names: readonly string[];
  readonly responses: readonly Response[];
  readonly linkOf: (unit: string, mount: string, role: 'emit' | 'receive') => number;
}

function responseNodes(
  set: TakeSet,
  choice: ModelChoice,
  reversible: readonly string[],
  classes: UnitClasses,
  faults: InputFault[],
): ResponseNodes {
  if (choice.kind === 'reciprocal' && reversible.length > 0) {
    faults.push({
      place: { file: '--reversible' },
      found: `${reversible.join(', ')} with the reciprocal model`,
      expected: 'the directional model, in which single units may be reversible',
      remedy: 'Leave --reversible out (all units are reversible already), or use --model directional.',
    });
  }
  const known = new Set(set.takes.flatMap((take) => [take.emitter, take.receiver]));
  for (const unit of reversible) if (!known.has(unit)) faults.push(unknownUnit({ file: '--reversible' }, unit, known));
  const reversibleClasses = new Set(reversible.map((unit) => classes.nameOf(unit)));
  const names: string[] = [];
  const linkByKey = new Map<string, number>();
  const linkOf = (unit: string, mount: string, role: 'emit' | 'receive'): number => {
    const sameUnit = classes.nameOf(unit);
    const shared = choice.kind === 'reciprocal' || reversibleClasses.has(sameUnit);
    const key = JSON.stringify([sameUnit, mount, shared ? 'both' : role]);
    let link = linkByKey.get(key);
    if (link === undefined) {
      link = names.length;
      linkByKey.set(key, link);
      names.push(shared ? placed(sameUnit, mount) : `${placed(sameUnit, mount)} ${role}`);
    }
    return link;
  };
  const responses: Response[] = [];
  for (const { unit, mount, roles } of unitsAsNamed(set)) {
    const isReversible = reversibleClasses.has(classes.nameOf(unit));
    const own: readonly Role[] = choice.kind === 'reciprocal' ? ['both'] : isReversible ? ['emit', 'receive'] : roles;
    for (const role of own) {
      const link = linkOf(unit, mount, role === 'both' ? 'emit' : role);
      responses.push({ unit, mount, role, link, offset: undefined });
    }
  }
  return { names, responses, linkOf };
}

interface NamedUnit {
  readonly unit: string;
  readonly mount: string;
  readonly roles: readonly ('emit' | 'receive')[];
}

/** Units with their mounts in the order they are first named, with the roles they take. */
function unitsAsNamed(set: TakeSet): NamedUnit[] {
  const found = new Map<string, { unit: string; mount: string; roles: Set<'emit' | 'receive'> }>();
  const note = (unit: string, mount: string, role: 'emit' | 'receive') => {
    const key = JSON.stringify([unit, mount]);
    const entry = found.get(key) ?? { unit, mount, roles: new Set() };
    entry.roles.add(role);
    found.set(key, entry);
  };
  for (const take of set.takes) {
    note(take.emitter, take.emitterMount, 'emit');
    note(take.receiver, take.receiverMount, 'receive');
  }
  const order = ['emit', 'receive'] as const;
  return [...found.values()].map((entry) => ({ ...entry, roles: order.filter((role) => entry.roles.has(role)) }));
}

function placed(unit: string, mount: string): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}
