import { type ChainLayout, chainLayout } from '../estimate/chain-groups.ts';
import { type LevelScatter, refitLevel, scatterOfLevel } from '../estimate/scatter-of-level.ts';
import type { Solution } from '../estimate/solution.ts';
import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { bandColumns, takeTemplates } from './take-templates.ts';

/** The levels at which takes are compared, with the takes that stand. */
export interface ScreeningLevels {
  readonly layout: ChainLayout;
  readonly links: number;
  /** A template each: constant, slope, bands. */
  readonly templates: readonly {
    readonly kind: 'constant' | 'slope' | 'band';
    readonly from: number;
    readonly to: number;
    readonly scatter: LevelScatter;
  }[];
  /** A third-octave each. */
  readonly bands: readonly {
    readonly from: number;
    readonly to: number;
    readonly frequencies: readonly number[];
    readonly scatter: LevelScatter;
  }[];
}

/** The levels with all takes, their scatter found robustly. */
export function startingLevels(set: TakeSet, model: Model, solution: Solution): ScreeningLevels {
  const layout = chainLayout(set, model);
  const links = model.linksPerFrequency;
  return {
    layout,
    links,
    templates: takeTemplates(set, solution).map(({ kind, from, to, deviations }) => ({
      kind,
      from,
      to,
      scatter: scatterOfLevel(layout, links, deviations),
    })),
    bands: bandColumns(set, solution).map(({ from, to, frequencies, deviations }) => ({
      from,
      to,
      frequencies,
      scatter: scatterOfLevel(layout, links, deviations),
    })),
  };
}

/** The same scatter with other takes standing: only the links are fitted again. */
export function refit(levels: ScreeningLevels, active: readonly boolean[]): ScreeningLevels {
  const one = <L extends { readonly scatter: LevelScatter }>(level: L): L => {
    const present = hasReading(level.scatter);
    const both = active.map((is, t) => is && present(t));
    return { ...level, scatter: refitLevel(levels.layout, levels.links, level.scatter, both) };
  };
  return { ...levels, templates: levels.templates.map(one), bands: levels.bands.map(one) };
}

/** The scatter found again from the takes that stand. */
export function estimateAgain(levels: ScreeningLevels, active: readonly boolean[]): ScreeningLevels {
  const one = <L extends { readonly scatter: LevelScatter }>(level: L): L => {
    const present = hasReading(level.scatter);
    const deviations = { ...level.scatter.deviations, active: active.map((is, t) => is && present(t)) };
    return { ...level, scatter: scatterOfLevel(levels.layout, levels.links, deviations) };
  };
  return { ...levels, templates: levels.templates.map(one), bands: levels.bands.map(one) };
}

// A take without readings here has NaN in its row, or never was active.
function hasReading({ deviations }: LevelScatter): (take: number) => boolean {
  const { present } = deviations;
  return (take) => present[take]!;
}
