import type { ExtraTake, OpenFinding } from '../findings/examination.ts';
import { bandsWith, unitHolds } from './held-bands.ts';
import { bandsText } from './hold-wording.ts';
import { extraTakeText } from './open-wording.ts';
import type { Result } from './result.ts';
import { adviceText, cureText, flaggedTakes, takeName, tieGroups, tieSteps } from './take-wording.ts';
import { atFrequencies, counted, FEW_NAMES, listText } from './wording.ts';

/** Something to do next, and what it buys. */
export interface NextStep {
  readonly what: string;
  readonly why: string;
}

/** What to measure next, the most pressing first; empty where nothing is called for. */
export function nextSteps(result: Result): NextStep[] {
  const all = [
    ...flaggedSteps(result),
    ...tieNext(result),
    ...openSteps(result),
    ...checkSteps(result),
    ...scatterSteps(result),
  ];
  // One take may serve several ends: it is told once.
  const steps = new Map<string, NextStep>();
  for (const { what, why } of all) {
    const same = steps.get(what);
    steps.set(what, same === undefined ? { what, why } : { what, why: `${same.why} ${why}` });
  }
  return [...steps.values()];
}

function flaggedSteps(result: Result): NextStep[] {
  const { set, examination } = result;
  return flaggedTakes(examination).map((finding) => {
    const take = set.takes[finding.take]!;
    const buys = finding.isLeftOut
      ? ' Until then it does not count.'
      : ' Until then it is in, and pulls the units concerned.';
    return {
      what: `Take ${take.emitter} > ${take.receiver} again, for ${take.id}`,
      why: `${adviceText(result, finding)}${buys}`,
    };
  });
}

function tieNext({ set, examination }: Result): NextStep[] {
  return tieGroups(examination).map((group) => {
    const names = listText(group.map(({ take }) => takeName(set.takes[take]!)));
    const { emitter, receiver } = set.takes[group[0]!.take]!;
    return {
      what: `Take ${emitter} > ${receiver} again, mounted anew`,
      why: `${names} are tied. ${tieSteps({ set }, group)}`,
    };
  });
}

function openSteps({ set, examination }: Result): NextStep[] {
  return examination.open.map((finding) => ({
    what: cureOf(finding),
    why: gainOfCure(finding, set.frequencies),
  }));
}

/** What the cure of a freedom buys; why it is open stands with the bench. */
function gainOfCure({ kind, status, responses, frequencies: at }: OpenFinding, frequencies: Float64Array): string {
  const [names, where] = [listText(responses, FEW_NAMES), atFrequencies(at, frequencies)];
  if (status === 'datum') return `It puts what is measured in the place of the datum of ${names} ${where}.`;
  if (kind === 'one constant') return `It ties ${names} to the others ${where}.`;
  return `It gives ${names} a level ${where}.`;
}

function cureOf({ kind, extraTakes }: OpenFinding): string {
  if (extraTakes.length > 0)
    return `Take ${listText(extraTakes.map((take) => extraTakeText(take, extraTakes.length > 1)))}`;
  const cures: Record<OpenFinding['kind'], string> = {
    'no odd loop': 'Give a reference for one of the units',
    'not measured': 'Take it at these frequencies',
    'one constant': 'Give a reference, or declare a unit reversible',
    path: 'Give the level of the path',
    gain: 'Take the same pairs in a second session, or give the gain',
  };
  return cures[kind];
}

/** Takes that nothing checks, those with the same cure together. */
function checkSteps({ set, examination }: Result): NextStep[] {
  const groups = new Map<string, { cure: ExtraTake; takes: number[] }>();
  for (const { take, verdict, cure } of examination.takes) {
    if (verdict !== 'uncheckable' || cure === undefined) continue;
    const key = JSON.stringify([cure.emitter, cure.receiver, cure.path]);
    const group = groups.get(key) ?? { cure, takes: [] };
    group.takes.push(take);
    groups.set(key, group);
  }
  return [...groups.values()].map(({ cure, takes }) => {
    const ids = takes.map((t) => set.takes[t]!.id);
    return {
      what: `Take ${cureText(cure, set.takes[takes[0]!]!)}`,
      why: `It checks ${listText(ids, FEW_NAMES)}, which nothing checks now.`,
    };
  });
}

/** What would make the levels better, or would not. */
function scatterSteps({ examination }: Result): NextStep[] {
  const { scatter, holds } = examination;
  const steps: NextStep[] = [];
  const seated = scatter.filter(({ verdict }) => verdict === 'reseat' || verdict === 'reseat or partner').length;
  if (2 * seated > scatter.length) {
    steps.push({
      what: 'For lower uncertainty, mount pairs once more rather than repeat takes as they sit',
      why: `In ${seated} of ${counted(scatter.length, 'band')} mounting again changes more than repeating does.`,
    });
  }
  const broken = unitHolds(holds).filter((unit) => bandsWith(unit, 'broken') > 0);
  for (const { name, runs } of broken) {
    const bands = bandsText(runs.filter(({ verdict }) => verdict === 'broken'));
    steps.push({
      what: `Use ${name} elsewhere only outside ${bands}`,
      why: 'There its response depends on the partner. No further take cures that; another way of mounting may.',
    });
  }
  return steps;
}
