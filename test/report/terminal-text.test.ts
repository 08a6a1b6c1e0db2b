import { describe, expect, test } from 'vitest';
import { faultList } from '../../src/report/fault-list.ts';
import { inspectText } from '../../src/report/inspect-text.ts';
import { PLAIN_STYLE, type TextStyle } from '../../src/report/result.ts';
import { terminalSummary } from '../../src/report/terminal-summary.ts';
import { displayWidth, wrapped } from '../../src/report/text-layout.ts';
import {
  DIRECTIONAL,
  type Example,
  FORTY,
  HOSTILE,
  ISLANDS,
  inspectionOf,
  resultOf,
  SHIFTED,
} from './example-results.ts';

const solved = async (example: Example, folder: string | undefined = 'out') =>
  terminalSummary(await resultOf(example), { folder, style: PLAIN_STYLE });
const inspected = (example: Example) => inspectText(inspectionOf(example), PLAIN_STYLE);
/** Text with every run of white space as one blank, so that line ends do not matter. */
const flat = (text: string) => text.replace(/\s+/g, ' ');

const LONG: Example = {
  ...ISLANDS,
  lines: ISLANDS.lines.map((line) => ({
    ...line,
    emitter: `${line.emitter} ${'x'.repeat(90)}`,
    receiver: `${line.receiver}${'漢字'.repeat(40)}`,
    session: 'y'.repeat(100),
    path: 'z'.repeat(100),
  })),
};

test('no line is wider than 80 columns, whatever the labels', async () => {
  for (const example of [ISLANDS, SHIFTED, DIRECTIONAL, FORTY, HOSTILE, LONG]) {
    for (const text of [await solved(example, 'o'.repeat(100)), inspected(example)]) {
      for (const line of text.split('\n')) expect(displayWidth(line), line).toBeLessThanOrEqual(80);
    }
  }
});

test('labels reach the terminal without control characters or turned direction', async () => {
  for (const text of [await solved(HOSTILE), inspected(HOSTILE)]) {
    expect(text.replaceAll('\n', '')).not.toMatch(/[\p{Cc}\u202e]/u);
    expect(text).toContain('two\\u000alines');
  }
});

describe('terminal summary', () => {
  test('goes from what was read over the verdict to the units, what is open, the files, and the caution', async () => {
    const text = flat(await solved(ISLANDS));
    const inOrder = [
      'Read 1 file, 4 takes, 5 units, 4 pairs, 1 session, at 1 kHz.',
      '3 of 5 units are determined at every frequency; open throughout are yonder and beyond.',
      'Typical expanded uncertainty of a level (95 %): 0.68 dB.',
      'No take is spare, so that nothing checks these levels.',
      'A 6.00 0.68 1 · ·',
      'yonder none none · · 1',
      'Open at 1 kHz: yonder and beyond have no level, since no odd loop ties them. Known is the sum yonder + beyond. One take would settle it: yonder > A.',
      'half of the path',
      'Written to out: report.html, responses.csv,',
      'Relative bench results are not an accredited calibration.',
    ];
    const places = inOrder.map((part) => text.indexOf(part));
    expect(places).not.toContain(-1);
    expect(places).toEqual([...places].sort((a, b) => a - b));
  });

  test('residuals far beyond the uncertainties are a warning that says by how much', async () => {
    // Chi-square per degree of freedom 16 (see json-files.test.ts): residuals 4 times as large; with 3 degrees of freedom
    // chance alone makes 1 + 3/√6 = 2.2 of it.
    expect(flat(await solved(SHIFTED))).toContain(
      'That is 4.0 times what the uncertainties of the readings say (chi-square per degree of freedom 16): they are too small, or responses depend on the partner, or some takes disagree.',
    );
    expect(flat(await solved({ ...SHIFTED, u: 2 }))).toContain('The uncertainties of the readings allow for that');
  });

  test('where nothing was left over, no agreement is claimed', async () => {
    expect(flat(await solved(FORTY))).toContain('The fit leaves nothing unexplained.');
  });

  test('a set in which nothing can be told names every unit and gives no figure', async () => {
    const lines = [
      { emitter: 'north', receiver: 'east', levels: [10] },
      { emitter: 'east', receiver: 'south', levels: [8] },
      { emitter: 'south', receiver: 'west', levels: [7] },
      { emitter: 'west', receiver: 'north', levels: [9] },
    ];
    const text = flat(await solved({ frequencies: [1000], lines, options: { model: 'reciprocal' }, u: 0.1 }));
    expect(text).toContain('No level can be told: north, east, south and west are open.');
    expect(text).toContain(
      'Known are the differences among north and south, among east and west, and the sums of one of north and south with one of east and west. One take would settle it: north > south.',
    );
  });

  test('a directional set names its datum, and the take that would tie its parts', async () => {
    const text = flat(await solved(DIRECTIONAL));
    expect(text).toContain(
      'None of 5 units is determined at every frequency; 3 rest on a datum; open throughout are D and yonder.',
    );
    expect(text).toContain('Datum at every frequency: mean(emit − receive) = 0 dB over A, B, C.');
    expect(text).toContain('Known is the sum D emit + yonder receive. A take would tie them to the others: D > A.');
  });

  test('a unit with a level that nothing checks is named', async () => {
    const lines = [...SHIFTED.lines, { emitter: 'A', receiver: 'E', levels: [0, 0] }];
    expect(flat(await solved({ ...SHIFTED, lines }))).toContain(
      'Nothing checks E: every reading of it is needed for its level. A take with a further partner would, such as B > E.',
    );
  });

  test('forty units are all in the table', async () => {
    const lines = (await solved(FORTY)).split('\n');
    expect(lines.filter((line) => /^N\d\d +-10\.50 /.test(line))).toHaveLength(40);
  });

  test('notices of reading and gathering, and rows that could not be used, are told once each', async () => {
    const unused = [{ file: 'bench.csv', line: 7, column: 'level_db', value: 'n/a', reason: 'not a number' }];
    const text = flat(
      await solved({
        ...ISLANDS,
        input: { unused, notices: ['Column temp is kept out.', 'Column temp is kept out.'] },
      }),
    );
    expect(text.match(/Column temp is kept out\./g)).toHaveLength(1);
    expect(text).toContain('1 row could not be used. unused.csv tells which, and why.');
  });

  test('styles set off whole lines and change no text', async () => {
    const mark = (sign: string) => (text: string) => `<${sign}>${text}</${sign}>`;
    const style: TextStyle = {
      strong: mark('s'),
      faint: mark('f'),
      good: mark('g'),
      warning: mark('w'),
      bad: mark('b'),
    };
    const result = await resultOf(ISLANDS);
    const styled = terminalSummary(result, { folder: 'out', style });
    expect(styled).toContain('<w>3 of 5 units');
    expect(styled.replace(/<\/?[sfgwb]>/g, '')).toBe(terminalSummary(result, { folder: 'out', style: PLAIN_STYLE }));
  });

  test('without a folder no file is said to be written', async () => {
    const result = await resultOf(ISLANDS);
    expect(terminalSummary(result, { folder: undefined, style: PLAIN_STYLE })).not.toMatch(/Written|responses\.csv/);
  });
});

describe('inspect', () => {
  test('shows pairs as a matrix in the order of the units, with a dot where there is no take', () => {
    const repeated = [...SHIFTED.lines, SHIFTED.lines[0]!].map((line, t) => ({ ...line, repeat: String(t) }));
    expect(inspected({ ...SHIFTED, lines: repeated })).toContain(
      ['Takes of each pair', 'emitter  B  C  D', 'A        2  1  1', 'B        ·  1  1', 'C        ·  ·  1'].join('\n'),
    );
  });

  test('a wide matrix is folded without losing a take', () => {
    const text = inspected(FORTY);
    const matrix = text.slice(text.indexOf('Takes of each pair'), text.indexOf('Bench'));
    const counts = matrix.split('\n').filter((line) => /^N\d\d /.test(line));
    expect(counts.join(' ').match(/(?<= )1(?= |$)/g)).toHaveLength(120);
  });

  test('receivers with long names stand as numbers with a key', () => {
    const lines = SHIFTED.lines.map((line) => ({ ...line, receiver: `receiver ${line.receiver}` }));
    const text = inspected({ ...SHIFTED, lines, options: { model: 'directional' } });
    expect(text).toContain('Receivers: 1 receiver B, 2 receiver C, 3 receiver D');
  });

  test('says that seatings are assumed, and counts those that are given', () => {
    const rule = 'each pair in each session counts as one seating of each of its units.';
    expect(flat(inspected(ISLANDS))).toContain(`No seating given: ${rule}`);
    const lines = ISLANDS.lines.map((line, t) =>
      t < 2 ? { ...line, emitterSeating: '1', receiverSeating: `s${t}` } : line,
    );
    expect(flat(inspected({ ...ISLANDS, lines }))).toContain(
      `3 seatings of the units given, in 2 of 4 takes; where none is, ${rule}`,
    );
  });

  test('names connected parts with their shortest odd loop, and what would cure an open one', () => {
    const text = flat(inspected(ISLANDS));
    expect(text).toContain('A, B and C, at 1 kHz: shortest odd loop A - B - C - A.');
    expect(text).toContain('yonder and beyond, at 1 kHz: no odd loop, so that one constant is open.');
    expect(text).toContain('One take would settle it: yonder > A.');
  });

  test('a twin reading fixes its unit, and takes with other frequencies are a range of their own', () => {
    const lines = [
      { emitter: 'solo', receiver: 'solo', levels: [12, 12] },
      { emitter: 'solo', receiver: 'mate', levels: [9, Number.NaN] },
    ];
    const text = flat(inspected({ frequencies: [1000, 2000], lines, options: { model: 'reciprocal' } }));
    expect(text).toContain('solo and mate, at 1 kHz: a twin reading of solo fixes them.');
    expect(text).toContain('1 kHz to 2 kHz, 2 readings each: 1 take (T001). - 1 kHz: 1 take (T002).');
    expect(text).toContain('Open at 2 kHz: mate has no level, since nothing was measured there.');
  });

  test('counts the rows that could not be used, and shows the first five', () => {
    const unused = Array.from({ length: 7 }, (_, i) => ({
      file: 'bench.csv',
      line: i + 2,
      column: 'level_db',
      value: i === 0 ? '' : `v${i}`,
      reason: 'not a number',
    }));
    const text = flat(inspected({ ...ISLANDS, input: { unused } }));
    expect(text).toContain('7 rows could not be used. The first of them: bench.csv:2 level_db: empty (not a number);');
    expect(text).toContain('v4 (not a number).');
    expect(text).not.toContain('v5');
  });
});

describe('fault list', () => {
  const fault = (line: number) => ({
    place: { file: 'bench.csv', line, column: 'level_db' },
    found: 'a\nb',
    expected: 'a number',
    remedy: 'Correct it.',
  });

  test('a fault is one line, whatever it quotes', () => {
    expect(faultList([fault(3)])).toBe('bench.csv:3 level_db: found a\\u000ab; expected a number. Correct it.\n');
  });

  test('twenty are shown, the rest is counted', () => {
    const list = (count: number) =>
      faultList(Array.from({ length: count }, (_, i) => fault(i)))
        .trimEnd()
        .split('\n');
    expect(list(20)).toHaveLength(20);
    expect(list(21).at(-1)).toBe('and 1 more fault');
    expect(list(45)).toHaveLength(21);
    expect(list(45).at(-1)).toBe('and 25 more faults');
  });
});

test('a line is not broken within a take or between a number and its unit', () => {
  expect(wrapped('take A > B at 12 kHz', { width: 12 })).toEqual(['take A > B', 'at 12 kHz']);
  expect(wrapped('take a A > B at 12 kHz', { width: 11 })).toEqual(['take a', 'A > B at', '12 kHz']);
});
