import type { Solution } from '../estimate/solution.ts';
import type { Model, Response } from '../model/model.ts';
import type { Take } from '../takes/take-set.ts';
import type { Explanation } from './explanations.ts';

/** Another chain that the take may have been, with the deviation it would show then, in dB a frequency. */
export interface OtherChain {
  readonly explanation: Extract<Explanation, { kind: 'another label' | 'direction reversed' }>;
  readonly curve: Float64Array;
}

/** Every chain that one wrong label would make of the take: either end another unit, or both ends exchanged. */
export function otherChains(model: Model, solution: Solution, take: Take, index: number, width: number): OtherChain[] {
  const level = (link: number, f: number) => solution.estimates[f * model.linksPerFrequency + link]!;
  const ends = model.chains[index]!.links.filter((link) => model.links[link]?.kind === 'response');
  const own: readonly [number, number] = [ends[0]!, ends[1] ?? ends[0]!];
  const curveOf = (emit: number, receive: number) =>
    Float64Array.from(
      { length: width },
      (_, f) => level(emit, f) + level(receive, f) - level(own[0], f) - level(own[1], f),
    );
  const found: OtherChain[] = [];
  for (const end of ['emitter', 'receiver'] as const) {
    const role = end === 'emitter' ? 'emit' : 'receive';
    const seen = new Set<number>(own);
    for (const other of model.responses) {
      if (other.unit === take.emitter || other.unit === take.receiver) continue;
      if (!(other.role === role || other.role === 'both') || seen.has(other.link)) continue;
      seen.add(other.link);
      const curve = end === 'emitter' ? curveOf(other.link, own[1]) : curveOf(own[0], other.link);
      found.push({ explanation: { kind: 'another label', end, unit: placed(other) }, curve });
    }
  }
  const emit = linkOf(model, take.receiver, take.receiverMount, 'emit');
  const receive = linkOf(model, take.emitter, take.emitterMount, 'receive');
  if (emit !== undefined && receive !== undefined && (emit !== own[1] || receive !== own[0])) {
    found.push({ explanation: { kind: 'direction reversed' }, curve: curveOf(emit, receive) });
  }
  return found;
}

function linkOf(model: Model, unit: string, mount: string, role: 'emit' | 'receive'): number | undefined {
  return model.responses.find(
    (response) =>
      response.unit === unit && response.mount === mount && (response.role === role || response.role === 'both'),
  )?.link;
}

function placed({ unit, mount }: Response): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}
