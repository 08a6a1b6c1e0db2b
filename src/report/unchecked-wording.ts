import type { UnitFinding } from '../findings/examination.ts';
import type { Model } from '../model/model.ts';
import { responseName } from './response-name.ts';
import type { Result } from './result.ts';
import { cureText, takeName } from './take-wording.ts';
import { listText } from './wording.ts';

/** What nothing checks: first the units, then the takes that no unit named before stands for. */
export function uncheckedSentences(result: Result): string[] {
  const units = uncheckedUnits(result.examination.units);
  return [...unitSentences(result, units), ...takeSentences(result, linksOf(result.model, units))];
}

/** Units with a level that nothing checks; none where that is true of all of them, since the verdict says so. */
function uncheckedUnits(findings: readonly UnitFinding[]): UnitFinding[] {
  const told = findings.filter(({ counts }) => counts.ok + counts.datum > 0);
  const unchecked = told.filter((unit) => unit.unchecked);
  return unchecked.length === told.length ? [] : unchecked;
}

function unitSentences(result: Result, units: readonly UnitFinding[]): string[] {
  if (units.length === 0) return [];
  const { model } = result;
  const names = units.map(({ response }) => responseName(model.responses[response]!));
  const [it, level, each] = units.length === 1 ? ['it', 'its level', ''] : ['them', 'their levels', ' for each'];
  const links = linksOf(model, units);
  const cures = [...curesOf(result, (take) => touches(model, take, links)).keys()].filter((cure) => cure !== '');
  const suchAs = cures.length === 0 ? '' : `, such as ${listText(cures)}`;
  return [
    `Nothing checks ${listText(names)}: every reading of ${it} is needed for ${level}. A take with a further partner${each} would${suchAs}.`,
  ];
}

function takeSentences(result: Result, but: ReadonlySet<number>): string[] {
  const cures = curesOf(result, (take) => !touches(result.model, take, but));
  return [...cures].map(([cure, names]) => `Nothing checks ${listText(names)}${cure === '' ? '' : `; ${cure} would`}.`);
}

/** Names of uncheckable takes by the take that would check them; an empty text where none can be named. */
function curesOf({ set, examination }: Result, isWanted: (take: number) => boolean): Map<string, string[]> {
  const cures = new Map<string, string[]>();
  for (const { take: t, verdict, cure } of examination.takes) {
    if (verdict !== 'uncheckable' || !isWanted(t)) continue;
    const take = set.takes[t]!;
    const key = cure === undefined ? '' : cureText(cure, take);
    cures.set(key, [...(cures.get(key) ?? []), takeName(take)]);
  }
  return cures;
}

function linksOf(model: Model, units: readonly UnitFinding[]): Set<number> {
  return new Set(units.map(({ response }) => model.responses[response]!.link));
}

function touches(model: Model, take: number, links: ReadonlySet<number>): boolean {
  return model.chains[take]!.links.some((link) => links.has(link));
}
