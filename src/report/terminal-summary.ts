import type { UnitFinding } from '../findings/examination.ts';
import { roundedText } from '../quantity/rounding.ts';
import { benchCounts } from './bench-counts.ts';
import { outputFiles } from './output-files.ts';
import { responseName } from './response-name.ts';
import type { Result, TextStyle } from './result.ts';
import { type TableRow, TERMINAL_WIDTH, textTable, wrapped } from './text-layout.ts';
import {
  allNotices,
  CAUTIONS,
  gainSentence,
  modelSentences,
  openSentence,
  percentText,
  readSentence,
  type Statement,
  uncheckedSentence,
  unusedSentence,
  verdict,
} from './wording.ts';

interface TerminalOptions {
  /** Where the files were written; absent where none were. */
  readonly folder: string | undefined;
  readonly style: TextStyle;
}

/** What `solve` says at the end, at most 80 columns wide: verdict, units, what is open, where the files are. */
export function terminalSummary(result: Result, { folder, style }: TerminalOptions): string {
  // Each section is a list of lines; an empty one is left out. Further sections are further entries.
  const sections: readonly (readonly string[])[] = [
    wrapped(readSentence(result.input, benchCounts(result.set, result.model))),
    verdict(result).flatMap((statement) => toned(statement, style)),
    unitTable(result, style),
    basisLines(result),
    openLines(result, style),
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
  const header: TableRow = { cells: ['unit', 'level, dB', 'U, dB', 'ok', 'datum', 'open'], style: style.strong };
  const rows = examination.units.map((unit): TableRow => {
    const { ok, datum, open } = unit.counts;
    const count = (value: number) => (value === 0 ? '·' : String(value));
    return {
      cells: [responseName(model.responses[unit.response]!), ...levelCells(unit), count(ok), count(datum), count(open)],
      style: open > 0 ? style.warning : undefined,
    };
  });
  const caption = `level: median over frequency; U: its typical expanded uncertainty (${percentText(coverage)}); ok, datum, open: number of frequencies`;
  return [...textTable([header, ...rows]), ...wrapped(caption).map(style.faint)];
}

/** A level and its U, both with two digits of U. */
function levelCells({ medianLevel: level, medianExpanded: expanded }: UnitFinding): [string, string] {
  if (Number.isNaN(level)) return ['none', 'none'];
  return [roundedText(level, expanded), Number.isNaN(expanded) ? 'none' : roundedText(expanded, expanded)];
}

/** What the figures rest on. */
function basisLines({ model, solution }: Result): string[] {
  const sentences = [
    ...modelSentences(model),
    solution.readingUncertainty.statement,
    gainSentence({ model, solution }),
  ];
  return sentences.filter((sentence) => sentence !== '').flatMap((sentence) => wrapped(sentence));
}

function openLines({ model, examination, set }: Result, style: TextStyle): string[] {
  const sentences = [
    ...examination.open.map((finding) => openSentence(finding, set.frequencies)),
    uncheckedSentence(model, examination.units),
  ].filter((sentence) => sentence !== '');
  return listed('Open, or resting on a datum', sentences, style);
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
  const names = outputFiles(result).map((file) => file.name);
  return [
    ...wrapped(`Written to ${folder}:`).map(style.strong),
    ...wrapped(names.join(', '), { width: TERMINAL_WIDTH - 2 }).map((line) => `  ${line}`),
  ];
}
