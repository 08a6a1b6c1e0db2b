import type { UnitFinding } from '../findings/examination.ts';
import { roundedText } from '../quantity/rounding.ts';
import { changeSentences, levelSentences, lookalikeSentences, reciprocitySentences } from './agreement-wording.ts';
import { benchCounts } from './bench-counts.ts';
import { budgetSentence } from './budget-json.ts';
import { bandsWith, unitHolds } from './held-bands.ts';
import { dependenceSentences, holdsCell } from './hold-wording.ts';
import { monteCarloSentence } from './monte-carlo-json.ts';
import { openSentence } from './open-wording.ts';
import { outputFiles } from './output-files.ts';
import { placedUnit, responseName } from './response-name.ts';
import type { Result, TextStyle } from './result.ts';
import { flaggedParagraphs, flaggedTakes, tieGroups, tieSentence } from './take-wording.ts';
import { type TableRow, TERMINAL_WIDTH, textTable, wrapped } from './text-layout.ts';
import { uncheckedSentences } from './unchecked-wording.ts';
import { verdict } from './verdict-wording.ts';
import {
  allNotices,
  CAUTIONS,
  counted,
  gainSentence,
  modelSentences,
  percentText,
  readSentence,
  type Statement,
  unusedSentence,
} from './wording.ts';

interface TerminalOptions {
  /** Where the files were written; absent where none were. */
  readonly folder: string | undefined;
  readonly style: TextStyle;
}

/** What `solve` says at the end, at most 80 columns wide: verdict, units, takes to redo, what is open, where the files are. */
export function terminalSummary(result: Result, { folder, style }: TerminalOptions): string {
  // Each section is a list of lines; an empty one is left out. Further sections are further entries.
  const sections: readonly (readonly string[])[] = [
    wrapped(readSentence(result.input, benchCounts(result.set, result.model))),
    verdict(result).flatMap((statement) => toned(statement, style)),
    unitTable(result, style),
    dependenceLines(result, style),
    flaggedLines(result, style),
    agreementLines(result, style),
    openLines(result, style),
    basisLines(result),
    noticeLines(result, style),
    fileLines(result, folder, style),
    wrapped(CAUTIONS.join(' ')).map(style.faint),
  ];
  const text = sections.filter((lines) => lines.length > 0).map((lines) => lines.join('\n'));
  return `${text.join('\n\n')}\n`;
}

function toned({ text, tone }: Statement, style: TextStyle): string[] {
  const set = { plain: (line: string) => line, good: style.good, warning: style.warning, bad: style.bad }[tone];
  return wrapped(text).map((line) => set(line));
}

function unitTable(result: Result, style: TextStyle): string[] {
  const { model, examination, coverage } = result;
  const holds = new Map(unitHolds(examination.holds).map((hold) => [hold.name, hold]));
  // Where every level stands at every frequency, the verdict has said so.
  const hasCounts = examination.units.some(({ counts }) => counts.datum + counts.open > 0);
  const isTestable = examination.holds.some(({ verdict }) => verdict !== 'not testable');
  const hasReseat = examination.units.some((unit) => !Number.isNaN(unit.medianReseatUncertainty));
  const hasPartner = examination.units.some((unit) => !Number.isNaN(unit.medianPartnerUncertainty));
  const header = [
    'unit',
    'level, dB',
    'U, dB',
    ...(hasReseat || hasPartner ? ['u seated'] : []),
    ...(hasReseat ? ['reseated'] : []),
    ...(hasPartner ? ['partner'] : []),
    ...(hasCounts ? ['ok', 'datum', 'open'] : []),
  ];
  const rows = examination.units.map((unit): TableRow => {
    const response = model.responses[unit.response]!;
    const { ok, datum, open } = unit.counts;
    const count = (value: number) => (value === 0 ? '·' : String(value));
    const hold = holds.get(placedUnit(response));
    return {
      cells: [
        responseName(response),
        ...levelCells(unit),
        ...(hasReseat || hasPartner ? [uncertaintyCell(unit.medianUncertainty)] : []),
        ...(hasReseat ? [uncertaintyCell(unit.medianReseatUncertainty)] : []),
        ...(hasPartner ? [uncertaintyCell(unit.medianPartnerUncertainty)] : []),
        ...(hasCounts ? [ok, datum, open].map(count) : []),
        ...(isTestable ? [holdsCell(hold)] : []),
      ],
      style: hold !== undefined && bandsWith(hold, 'broken') > 0 ? style.bad : open > 0 ? style.warning : undefined,
    };
  });
  const caption = [
    `level: median over frequency; U: its typical expanded uncertainty (${percentText(coverage)})`,
    ...(hasReseat || hasPartner ? ['u: standard uncertainty in dB as seated'] : []),
    ...(hasReseat ? ['reseated: u for the unit mounted once more'] : []),
    ...(hasPartner ? ['partner: u for it on another partner'] : []),
    ...(hasCounts ? ['ok, datum, open: number of frequencies'] : []),
    ...(isTestable ? ['holds: the bands where it does not depend on its partner'] : []),
  ];
  const head: TableRow = { cells: [...header, ...(isTestable ? ['holds'] : [])], style: style.strong };
  return [
    ...textTable([head, ...rows], TERMINAL_WIDTH, { lastIsWords: isTestable }),
    ...wrapped(caption.join('; ')).map(style.faint),
  ];
}

/** A level and its U, both with two digits of U. */
function levelCells({ medianLevel: level, medianExpanded: expanded }: UnitFinding): [string, string] {
  if (Number.isNaN(level)) return ['none', 'none'];
  return [roundedText(level, expanded), uncertaintyCell(expanded)];
}

function uncertaintyCell(expanded: number): string {
  return Number.isNaN(expanded) ? 'none' : roundedText(expanded, expanded);
}

/** What the figures rest on. */
function basisLines({ model, solution, budget = [], monteCarlo }: Result): string[] {
  const sentences = [
    ...modelSentences(model),
    solution.readingUncertainty.statement,
    budgetSentence({ budget }),
    monteCarloSentence(monteCarlo),
    gainSentence({ model, solution }),
  ];
  return sentences.filter((sentence) => sentence !== '').flatMap((sentence) => wrapped(sentence));
}

/** Entries of a list before the rest is only counted. */
const MOST_ENTRIES = 10;

function dependenceLines(result: Result, style: TextStyle): string[] {
  const sentences = dependenceSentences(result);
  return listed('Responses that depend on the partner', capped(sentences, 'unit', 'holds.csv'), style);
}

/** A paragraph a line of thought, so that the eye finds take, size, reading and remedy at the same places. */
function flaggedLines(result: Result, style: TextStyle): string[] {
  const flagged = flaggedTakes(result.examination);
  if (flagged.length === 0) return [];
  const lines = flagged.slice(0, MOST_ENTRIES).flatMap((finding) => {
    const [title = '', ...paragraphs] = flaggedParagraphs(result, finding);
    const under = paragraphs.flatMap((text) =>
      wrapped(text, { width: TERMINAL_WIDTH - INDENT.length, indent: INDENT }),
    );
    return [...wrapped(`- ${title}`, { indent: INDENT }).map(style.bad), ...under.map((line) => INDENT + line)];
  });
  const more = flagged.length - MOST_ENTRIES;
  return [
    style.strong(`Takes that disagree, worst first${result.examination.whole.isModelFailing ? '' : ': redo these'}`),
    ...lines,
    ...(more > 0 ? [`- And ${counted(more, 'more take')}: see takes.csv.`] : []),
  ];
}

const INDENT = '  ';

function openLines(result: Result, style: TextStyle): string[] {
  const { examination, set } = result;
  const sentences = [
    ...tieGroups(examination).map((group) => tieSentence(result, group)),
    ...examination.open.map((finding) => openSentence(finding, set.frequencies)),
    ...capped(uncheckedSentences(result), 'such take', 'takes.csv'),
  ];
  return listed('Open, tied, unchecked, or resting on a datum', sentences, style);
}

function capped(sentences: readonly string[], name: string, file: string): string[] {
  const more = sentences.length - MOST_ENTRIES;
  if (more <= 0) return [...sentences];
  return [...sentences.slice(0, MOST_ENTRIES), `And ${counted(more, `more ${name}`)}: see ${file}.`];
}

function agreementLines(result: Result, style: TextStyle): string[] {
  return listed(
    'What depends on time, level, direction or a declaration',
    [
      ...lookalikeSentences(result),
      ...changeSentences(result),
      ...levelSentences(result),
      ...reciprocitySentences(result),
    ],
    style,
  );
}

function noticeLines({ input, set }: Result, style: TextStyle): string[] {
  const unused = unusedSentence(input);
  return listed(
    'Worth knowing',
    [...(unused === '' ? [] : [`${unused} unused.csv tells which, and why.`]), ...allNotices(input, set)],
    style,
  );
}

/** A heading with its points; nothing where there are no points. */
export function listed(heading: string, points: readonly string[], style: TextStyle): string[] {
  if (points.length === 0) return [];
  return [style.strong(heading), ...points.flatMap((point) => wrapped(`- ${point}`, { indent: '  ' }))];
}

function fileLines(result: Result, folder: string | undefined, style: TextStyle): string[] {
  if (folder === undefined) return [];
  // The page first: it is the one to open.
  const names = ['report.html', ...outputFiles(result).map((file) => file.name), 'figures'];
  return [
    ...wrapped(`Written to ${folder}:`).map(style.strong),
    ...wrapped(names.join(', '), { width: TERMINAL_WIDTH - 2 }).map((line) => `  ${line}`),
  ];
}
