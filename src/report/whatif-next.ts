import { coverageFactor } from '../numeric/student-t.ts';
import type { NextPlan, NextPurpose, NextTakes } from '../whatif/next-takes.ts';
import { availability, jsonFigure } from './json-text.ts';
import type { TextStyle } from './result.ts';
import { type TableRow, textTable, wrapped } from './text-layout.ts';
import { figureText, scatterSentence, seatingText, stretchText } from './whatif-wording.ts';
import { CAUTIONS, counted, FEW_NAMES, listText, percentText } from './wording.ts';

export interface NextResult {
  readonly version: string;
  /** Folder of the run. */
  readonly run: string;
  readonly coverage: number;
  readonly plan: NextPlan;
  readonly notices: readonly string[];
}

/** What `next` says: what is to be taken, most urgent first, and what each take buys. */
export function nextText({ run, coverage, plan, notices }: NextResult, style: TextStyle): string {
  const sections: readonly (readonly string[])[] = [
    wrapped(openingSentence(run, plan)).map(plan.takes.length === 0 ? style.good : (line) => line),
    takeTable(plan, coverage, style),
    targetLines(plan, coverage, style),
    wrapped(
      plan.needsUnit
        ? 'One of them needs a third unit, which the run does not have: any that can be mounted will do.'
        : '',
    ).filter((line) => line !== ''),
    wrapped(`Figures are of ${stretchText(plan.band)}, where u is largest. ${scatterSentence([plan.band])}`),
    notices.flatMap((notice) => wrapped(notice)),
    wrapped(CAUTIONS.join(' ')).map(style.faint),
  ];
  return `${sections
    .filter((lines) => lines.length > 0)
    .map((lines) => lines.join('\n'))
    .join('\n\n')}\n`;
}

function openingSentence(run: string, { takes, mean, worst, worstUnit }: NextPlan): string {
  const now = Number.isNaN(mean)
    ? 'No unit has a level yet.'
    : `Now: u ${figureText(mean)} dB typical, ${figureText(worst)} dB worst (${worstUnit}), as seated.`;
  if (takes.length === 0) {
    return `Nothing in ${run} calls for another take: nothing is open, flagged, tied or unchecked. ${now} A smaller u can be asked for with --target-db.`;
  }
  const count = takes.reduce((sum, { seatings }) => sum + seatings.length, 0);
  return `${counted(count, 'take')} most worth adding to ${run}, most urgent first. ${now}`;
}

/** What a take is for, in words. */
function purposeText({ purpose, about }: Pick<NextTakes, 'purpose' | 'about'>): string {
  const names = listText(about, FEW_NAMES);
  const texts: Readonly<Record<NextPurpose, string>> = {
    close: `gives ${names} a level`,
    redo: `redoes ${names}, which was flagged`,
    'break tie': `breaks the tie of ${names}`,
    check: `checks ${names}`,
    target: `lowers the worst, ${names}`,
  };
  return texts[purpose];
}

function takeTable({ takes }: NextPlan, coverage: number, style: TextStyle): string[] {
  if (takes.length === 0) return [];
  const factor = coverageFactor(coverage, Number.POSITIVE_INFINITY);
  const rows = takes.map(
    (next): TableRow => ({
      cells: [
        next.seatings.map(seatingText).join(', '),
        figureText(next.mean),
        figureText(factor * next.worst),
        `${purposeText(next)}${next.checks > 0 ? `; ${counted(next.checks, 'more take')} checked` : ''}`,
      ],
      style: next.purpose === 'close' ? style.warning : undefined,
    }),
  );
  const header = { cells: ['take', 'u, dB', 'worst U', 'what it buys'], style: style.strong };
  return [
    ...textTable([header, ...rows], undefined, { lastIsWords: true }),
    ...wrapped(
      `u typical and the worst unit's expanded uncertainty (${percentText(coverage)}) with this take and all above it`,
    ).map(style.faint),
  ];
}

function targetLines({ target }: NextPlan, coverage: number, style: TextStyle): string[] {
  if (target === undefined) return [];
  const { expanded, isReached, reached, limit } = target;
  const p = percentText(coverage);
  const text = isReached
    ? `Target reached: the worst unit then has U ${figureText(reached)} dB (${p}), asked for ${expanded} dB.`
    : limit > expanded
      ? `Target out of reach: U ${expanded} dB (${p}) was asked for, and with every pair taken endlessly often the worst unit would still have ${figureText(limit)} dB, from partner scatter alone.`
      : `Target not reached: the worst unit then has U ${figureText(reached)} dB (${p}), asked for ${expanded} dB. More takes (--most) would be needed.`;
  return wrapped(text).map(isReached ? style.good : style.warning);
}

/** The same for programs. */
export function nextRecord({ version, run, coverage, plan, notices }: NextResult): Readonly<Record<string, unknown>> {
  const { target, band } = plan;
  return {
    schema: 'oddloop-next/1',
    version,
    run,
    coverage,
    mean_u_db: jsonFigure(plan.mean),
    worst_u_db: jsonFigure(plan.worst),
    u_status: availability(plan.mean),
    worst_unit: plan.worstUnit === '' ? null : plan.worstUnit,
    scatter: {
      repeat_db: jsonFigure(band.repeat),
      reseat_db: jsonFigure(band.reseat),
      partner_db: jsonFigure(band.partner),
      assumed: band.assumed,
    },
    takes: plan.takes.map(({ purpose, seatings, about, closes, checks, mean, worst }) => ({
      purpose,
      takes: seatings.map(({ emitter, receiver, path }) => ({ emitter, receiver, path: path === '' ? null : path })),
      about,
      closes,
      checks,
      mean_u_db: jsonFigure(mean),
      worst_u_db: jsonFigure(worst),
      u_status: availability(mean),
    })),
    target:
      target === undefined
        ? null
        : {
            expanded_db: target.expanded,
            reached: target.isReached,
            reached_db: jsonFigure(target.reached),
            limit_db: jsonFigure(target.limit),
          },
    needs_a_further_unit: plan.needsUnit,
    notices,
    cautions: CAUTIONS,
  };
}
