import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type Part, readingParts } from './reading-parts.ts';
import type { CovarianceBlock, Solution, UncertaintySource } from './solution.ts';
import { thirdOctaves } from './third-octaves.ts';

/** One source of a response's uncertainty in one third-octave band. */
export interface BudgetPart {
  /** `repeat`, `reseat`, `partner`, `gain`, `noise`, `rounding` …; a certificate, a path, or a line of the user's budget by name. */
  readonly source: string;
  /** A: from a statistical analysis of the takes, or said to be; B: from other knowledge. */
  readonly type: 'A' | 'B';
  /** What it brings to the response, in dB: root mean square over the band's frequencies. */
  readonly uncertainty: number;
  /** Its part of the variance, 0 to 1. */
  readonly share: number;
  /**
   * Change of the response per dB of the source; where many independent draws of it come together, the root of the sum of
   * squares. NaN where it is no single figure.
   */
  readonly sensitivity: number;
}

/** Where the uncertainty of a response, as seated, comes from in one band. */
export interface ResponseBudget {
  /** Index into `Model.responses`. */
  readonly response: number;
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Combined standard uncertainty in dB, root mean square over the band's frequencies; the parts' squares sum to its square. */
  readonly uncertainty: number;
  /** Largest first. */
  readonly parts: readonly BudgetPart[];
}

/**
 * The uncertainty of every response per third-octave band, split by source. Frequencies at which it has none are left out;
 * of many in a band some are taken, evenly spread: sources change slowly along a band.
 * Cost: takes × responses × frequencies taken.
 */
export function uncertaintyBudget(set: TakeSet, model: Model, solution: Solution): ResponseBudget[] {
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const sums = model.responses.map(() => bands.map(() => ({ count: 0, total: 0, sources: new Map<string, Source>() })));
  const isTaken = takenFrequencies(bandOf, bands.length);
  const partsOf = readingParts(set, model, solution);
  const n = model.linksPerFrequency;
  for (const block of solution.covariance) {
    const partsAt = partsOf(block);
    block.frequencies.forEach((f, k) => {
      if (!isTaken[f]) return;
      const scale = block.scales[k]!;
      model.responses.forEach(({ link }, response) => {
        const uncertainty = solution.uncertainty[f * n + link]!;
        if (Number.isNaN(uncertainty)) return;
        const sum = sums[response]![bandOf[f]!]!;
        sum.count++;
        sum.total += uncertainty ** 2;
        const parts = partsAt(link, f);
        const source = solution.scatter?.readingSource ?? solution.readingUncertainty.source;
        add(sum.sources, OWN[source].name, OWN[source].type, parts.own);
        add(sum.sources, 'noise', 'B', parts.noise);
        add(sum.sources, 'rounding', 'B', parts.rounding);
        add(sum.sources, 'reseat', 'A', parts.seat);
        add(sum.sources, 'partner', 'A', parts.partner);
        addKnown(sum.sources, model, block, link, f, scale);
        addCommon(sum.sources, block, link, n);
      });
    });
  }
  return sums.flatMap((perBand, response) =>
    perBand.flatMap(({ count, total, sources }, b) => {
      if (count === 0) return [];
      const { from, to } = bands[b]!;
      const parts = [...sources].flatMap(([source, { type, variance, squares }]): BudgetPart[] => {
        if (!(variance > 0)) return [];
        const [uncertainty, sensitivity] = [Math.sqrt(variance / count), Math.sqrt(squares / count)];
        return [{ source, type, uncertainty, share: variance / total, sensitivity }];
      });
      parts.sort((a, b) => b.share - a.share);
      return [{ response, from, to, uncertainty: Math.sqrt(total / count), parts }];
    }),
  );
}

/** Frequencies of a band beyond which they are thinned out. */
const MOST_OF_A_BAND = 12;

function takenFrequencies(bandOf: Int32Array, bands: number): boolean[] {
  const members = Array.from({ length: bands }, (): number[] => []);
  bandOf.forEach((band, f) => {
    members[band]!.push(f);
  });
  const isTaken = new Array<boolean>(bandOf.length).fill(false);
  for (const own of members) {
    const count = Math.min(own.length, MOST_OF_A_BAND);
    for (let k = 0; k < count; k++) isTaken[own[Math.floor(((k + 0.5) * own.length) / count)]!] = true;
  }
  return isTaken;
}

interface Source extends Part {
  readonly type: 'A' | 'B';
}

/** What a reading's own uncertainty is called, by where it comes from, and how it was evaluated. */
const OWN: Readonly<Record<UncertaintySource, { readonly name: string; readonly type: 'A' | 'B' }>> = {
  column: { name: 'reading', type: 'B' },
  given: { name: 'reading', type: 'B' },
  averages: { name: 'averages', type: 'B' },
  repeats: { name: 'repeat', type: 'A' },
  residuals: { name: 'fit', type: 'A' },
  scatter: { name: 'repeat', type: 'A' },
  none: { name: 'repeat', type: 'A' },
};

function add(sources: Map<string, Source>, name: string, type: 'A' | 'B', { variance, squares }: Part): void {
  const source = sources.get(name);
  if (source === undefined) sources.set(name, { type, variance, squares });
  else {
    source.variance += variance;
    source.squares += squares;
  }
}

/** Certificates and paths: the estimate moves by C[link][known] / u² per dB of the known value. */
function addKnown(
  sources: Map<string, Source>,
  { links, linksPerFrequency: n }: Model,
  { matrix }: CovarianceBlock,
  link: number,
  f: number,
  scale: number,
): void {
  for (let known = 0; known < n; known++) {
    const { prior, kind, name } = links[known]!;
    if (prior === undefined || Number.isNaN(prior.value[f]!)) continue;
    const variance = prior.uncertainty[f]! ** 2;
    const squares = ((scale * matrix[link * n + known]!) / variance) ** 2;
    const title = kind === 'response' ? `certificate ${name}` : name;
    add(sources, title, 'B', { variance: squares * variance, squares });
  }
}

/** Gains shared by all frequencies, and systematic effects. */
function addCommon(sources: Map<string, Source>, block: CovarianceBlock, link: number, n: number): void {
  const { ofGains, reaching = [] } = block;
  if (ofGains !== undefined) add(sources, 'gain', 'A', { variance: ofGains[link * n + link]!, squares: Number.NaN });
  for (const { effect, shifts } of reaching) {
    const { name, type, uncertainty } = effect.line;
    const squares = shifts[link]! ** 2;
    add(sources, BUILT_IN.has(name) ? `${name} (budget)` : name, type, {
      variance: squares * uncertainty ** 2,
      squares,
    });
  }
}

const BUILT_IN: ReadonlySet<string> = new Set([
  ...Object.values(OWN).map(({ name }) => name),
  'noise',
  'rounding',
  'reseat',
  'partner',
  'gain',
]);
