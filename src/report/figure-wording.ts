/** Titles, text alternatives and notes of the pictures. */
import type { LadderStep } from '../estimate/scatter-step.ts';
import type { TakeFinding } from '../findings/examination.ts';
import type { Role } from '../model/model.ts';
import { frequencyText } from '../quantity/frequency.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { Network } from './figures/network-layout.ts';
import type { ResidualCells } from './figures/residual-cells.ts';
import type { ResidualSteps } from './figures/residual-steps.ts';
import type { ResponseCurve } from './figures/response-curves.ts';
import { bandsWith, unitHolds } from './held-bands.ts';
import { bandsText } from './hold-wording.ts';
import type { Result } from './result.ts';
import { flaggedTakes, readsLike, takeName, tieGroups } from './take-wording.ts';
import { bandText, counted, FEW_NAMES, listText, percentText } from './wording.ts';

interface FigureTexts {
  readonly title: string;
  readonly description: string;
  readonly notes: readonly string[];
}

const ROLE_TITLES: Readonly<Record<Role, string>> = {
  both: 'Level of each unit',
  emit: 'Level of each unit when it emits',
  receive: 'Level of each unit when it receives',
};

export const figureTexts = {
  network(result: Result, { nodes, edges, missing, parts, isDirected }: Network): FigureTexts {
    const flagged = edges.flatMap((edge) => edge.flagged);
    const open = nodes.filter(({ isOpen }) => isOpen).map(({ name }) => name);
    const sentences = [
      `${counted(nodes.length, 'unit')} and ${counted(edges.length, isDirected ? 'directed pair' : 'pair')} between them, from ${counted(result.set.takes.length, 'take')}.`,
      ...(parts > 1 ? [`They are in ${parts} parts that no take connects.`] : []),
      missing.length === 0
        ? `Every pair${parts > 1 ? ' within a part' : ''} was taken.`
        : `${counted(missing.length, 'pair')} of connected units ${missing.length === 1 ? 'was' : 'were'} not taken${missing.length <= FEW_NAMES ? `: ${listText(missing.map(([a, b]) => `${nodes[a]!.name} with ${nodes[b]!.name}`))}` : ''}.`,
      flagged.length === 0 ? 'No take disagrees.' : `Takes that disagree: ${listText(flagged, FEW_NAMES)}.`,
      ...(open.length > 0 ? [`Without a level at some frequency: ${listText(open)}.`] : []),
    ];
    return {
      title: 'Who was measured against whom',
      description: sentences.join(' '),
      notes: sentences.slice(1, parts > 1 ? 3 : 2),
    };
  },

  responses(
    result: Result,
    curves: readonly ResponseCurve[],
    { role, hasRibbons, isThinned }: { readonly role: Role; readonly hasRibbons: boolean; readonly isThinned: boolean },
  ): FigureTexts {
    const { frequencies } = result.set;
    const ends = curves
      .map(({ name, level, expanded }) => ({ name, ...extremes(level), u: typical(expanded) }))
      .filter(({ low }) => Number.isFinite(low))
      .map(({ name, low, high, u }) => `${name} from ${roundedText(low, u)} to ${roundedText(high, u)} dB`);
    const onDatum = curves.filter(({ isOnDatum }) => isOnDatum).map(({ name }) => name);
    const broken = curves.filter(({ dependent }) => dependent.some(({ verdict }) => verdict === 'broken'));
    const notes = [
      hasRibbons
        ? `Shaded: expanded uncertainty as seated (${percentText(result.coverage)}).`
        : 'With so many units the uncertainty is in the readout and the table, not in the picture.',
      ...broken.map(
        ({ name, dependent }) =>
          `Hatched: ${name} depends on its partner at ${bandsText(dependent.filter(({ verdict }) => verdict === 'broken'))}; do not use it elsewhere there.`,
      ),
      ...(onDatum.length > 0 ? [`On a datum, named under The bench: ${listText(onDatum, FEW_NAMES)}.`] : []),
      ...(isThinned
        ? [
            `Of ${frequencies.length} frequencies, the highest and the lowest level in each pixel are drawn, so that no peak is lost; the table has all.`,
          ]
        : []),
    ];
    const description = `Level over frequency from ${frequencyText(frequencies[0]!)} to ${frequencyText(frequencies.at(-1)!)}: ${listText(ends) || 'no unit has a level'}. ${notes.join(' ')}`;
    return { title: ROLE_TITLES[role], description, notes };
  },

  holds({ examination, tolerance }: Result, units: readonly string[]): FigureTexts {
    const holds = unitHolds(examination.holds);
    const sentences = (['broken', 'strained', 'not testable'] as const).flatMap((verdict) => {
      const concerned = holds.filter((unit) => bandsWith(unit, verdict) > 0);
      if (concerned.length === 0) return [];
      const texts = concerned.map(
        ({ name, runs }) => `${name} at ${bandsText(runs.filter((run) => run.verdict === verdict))}`,
      );
      return [`${verdict[0]!.toUpperCase()}${verdict.slice(1)}: ${listText(texts)}.`];
    });
    const whole = holds.filter((unit) => unit.runs.every(({ verdict }) => verdict === 'holds'));
    const description = `${counted(units.length, 'unit')} by third-octave band. ${whole.length} of them hold in every band. ${sentences.join(' ')}`;
    return {
      title: 'Where each response may be used elsewhere',
      description,
      notes: [
        `A third-octave band each: does the response depend on what the unit is mounted against, by more than ${tolerance} dB?`,
      ],
    };
  },

  scatter({ examination, coverage }: Result, shown: readonly LadderStep[]): FigureTexts {
    const texts = shown.map((step) => {
      const { low, high } = extremes(Float64Array.from(examination.scatter, (band) => band[step].sd));
      return `${step} ${roundedText(low, high)} to ${roundedText(high, high)} dB`;
    });
    const mixed = examination.scatter.some(
      ({ reseat, partner }) => reseat.includes.length + partner.includes.length > 0,
    );
    return {
      title: 'What repeating, mounting again and another partner change',
      description: `Standard deviations in third-octave bands: ${listText(texts)}.`,
      notes: [
        `Each step is what it adds to the step below it; vertical lines are its ${percentText(coverage)} interval.`,
        ...(mixed ? ['Where two steps cannot be told apart, the upper one holds both.'] : []),
      ],
    };
  },

  residuals(result: Result, cells: ResidualCells, steps: ResidualSteps): FigureTexts {
    const { set, examination } = result;
    const named = [...flaggedTakes(examination), ...tieGroups(examination).flat()].map(({ take }) =>
      takeName(set.takes[take]!),
    );
    const grouped = [
      ...(cells.rows.length < set.takes.length ? [`${set.takes.length} takes in ${cells.rows.length} rows`] : []),
      ...(cells.columns.length < set.frequencies.length
        ? [`${set.frequencies.length} frequencies in ${cells.columns.length} columns`]
        : []),
    ];
    const notes = [
      'Reading less fit; takes in the order of the files. Striped: below the fit. A row of one colour is a shift; a spot, a local fault; a column, a frequency at which the model itself fits badly.',
      ...(grouped.length > 0
        ? [
            `There are ${listText(grouped)}; each cell shows its reading farthest from 0, so that the worst is never lost.`,
          ]
        : []),
    ];
    const description = `Residual of ${counted(set.takes.length, 'take')} over frequency, coloured from ${steps[0]} dB on. ${named.length === 0 ? 'No take disagrees.' : `Takes that disagree: ${listText(named, FEW_NAMES)}.`} ${notes.slice(1).join(' ')}`;
    return { title: 'Which take, where', description, notes };
  },

  take(result: Result, finding: TakeFinding, names: readonly string[]): FigureTexts {
    const take = result.set.takes[finding.take]!;
    const { worst } = finding;
    const most = worst === undefined ? '' : ` Most at ${bandText(worst)}: ${roundedText(worst.level, worst.level)} dB.`;
    const reading = readsLike(finding, result.coverage);
    return {
      title: `${takeName(take)} against what the others say of it`,
      description: `Deviation of the take over frequency.${most}${reading === '' ? '' : ` Reads like: ${reading}.`}`,
      notes: [
        `Shaded: expanded uncertainty of a single frequency (${percentText(result.coverage)}).`,
        ...(names.length > 1 ? ['The explanations drawn are equally good.'] : []),
      ],
    };
  },

  loops({ examination, coverage }: Result, dots: number, beyond: number): FigureTexts {
    const { loops, leftOut, beyondLimit } = examination.loops;
    const share = percentText(1 - coverage);
    const listed = beyondLimit > 0 ? ` ${beyondLimit} further loops are not listed.` : '';
    const other =
      leftOut > 0
        ? ` ${counted(leftOut, 'sum')} in which paths or gains cancel only along long walks are not listed.`
        : '';
    return {
      title: 'Alternating sums that must be zero',
      description: `${counted(loops.length, 'loop')} by third-octave band: ${beyond} of ${dots} closures are beyond their limit; by chance about ${share} would be.${listed}${other}`,
      notes: [
        `A loop is an even closed walk through the pairs; its levels, added and subtracted in turn, give 0 whatever the units are. ${beyond} of ${dots} closures are beyond their limit of ±U (${percentText(coverage)}); where nothing is wrong about ${share} would be. U holds what the readings scatter by, not what mounting anew and other partners add (see Scatter): where they add much, more closures are beyond. Takes that disagree are in the sums, so that they show.${listed}${other}`,
      ],
    };
  },

  budget({ budget = [] }: Result, sources: readonly string[]): FigureTexts {
    const shares = sources.map((source) => {
      const own = budget.map(({ parts }) => parts.find((part) => part.source === source)?.share ?? 0);
      return `${source} up to ${percentText(Number(Math.max(0, ...own).toFixed(2)))}`;
    });
    return {
      title: 'What the uncertainty is made of',
      description: `Parts of the variance of each response as seated, by third-octave band: ${listText(shares)}.`,
      notes: ['Of the level as seated. Variances add. Letters as in the legend.'],
    };
  },

  uncertainty({ coverage }: Result, shown: readonly string[]): FigureTexts {
    return {
      title: 'Expanded uncertainty for three uses',
      description: `Expanded uncertainty of each unit over frequency, ${listText(shown)}, on one scale.`,
      notes: [
        `${percentText(coverage)}. As seated: the mean over what was seen here. Seated again: the unit mounted once more. Other partner: mounted against another unit as well. The ground between two curves is what that use adds. One scale for all, logarithmic.`,
      ],
    };
  },
} as const;

function extremes(values: Float64Array): { low: number; high: number } {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const value of values) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  return { low, high };
}

/** Some uncertainty of the curve, for rounding only. */
function typical(expanded: Float64Array): number {
  return expanded.find((value) => value > 0) ?? Number.NaN;
}
