import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import type { PairFinding } from '../../src/findings/examination.ts';
import type { HoldFinding } from '../../src/findings/holds.ts';
import { holdsTable } from '../../src/report/holds-table.ts';
import { pairsTable } from '../../src/report/pairs-table.ts';
import { residualsTable } from '../../src/report/residuals-table.ts';
import { responsesTable } from '../../src/report/responses-table.ts';
import { takesTable } from '../../src/report/takes-table.ts';
import { unusedTable } from '../../src/report/unused-table.ts';
import {
  DIRECTIONAL,
  type Example,
  FORTY,
  HOSTILE,
  HOSTILE_LABELS,
  ISLANDS,
  resultOf,
  SHIFTED,
  textOf,
} from './example-results.ts';
import { FLAGGED, HOLD, judgedResult } from './judged-results.ts';

const NONE = Number.NaN;

describe('responses.csv', () => {
  test('a determined unit has level, u, k, U and degrees of freedom; an open one has its status and nothing else', async () => {
    // var(H) = 3/4 u² for three pairs of three units: u = 0.4 √0.75 = 0.346410; k = 1.959964 (normal, 95 %).
    expect(textOf(responsesTable(await resultOf(ISLANDS)))).toBe(
      [
        'unit,mount,role,frequency_hz,level_db,u_db,k,expanded_db,dof,u_reseat_db,u_partner_db,status,mounting',
        'A,,both,1000,6.000000,0.34641,1.95996,0.678951,inf,,,ok,not testable',
        'B,,both,1000,4.000000,0.34641,1.95996,0.678951,inf,,,ok,not testable',
        'C,,both,1000,2.000000,0.34641,1.95996,0.678951,inf,,,ok,not testable',
        'yonder,,both,1000,,,,,,,,open,not testable',
        'beyond,,both,1000,,,,,,,,open,not testable',
        '',
      ].join('\n'),
    );
  });

  test('without any uncertainty the cells for it are empty, never 0', async () => {
    const { u: _, ...without } = ISLANDS;
    const lines = textOf(responsesTable(await resultOf(without))).split('\n');
    expect(lines[1]).toBe('A,,both,1000,6.000000,,,,,,,ok,not testable');
  });

  test('a level that rests on a datum is written with that status, and mounts in their own column', async () => {
    const lines = ['A>B', 'B>A', 'A>C', 'C>A', 'B>C', 'C>B'].map((pair) => {
      const [emitter, receiver] = pair.split('>') as [string, string];
      return { emitter, receiver, levels: [0], emitterMount: 'bare', receiverMount: 'bare' };
    });
    const result = await resultOf({ frequencies: [1250.5], lines, options: { model: 'directional' }, u: 1 });
    expect(textOf(responsesTable(result)).split('\n')[1]).toMatch(
      /^A,bare,emit,1250.5,0.000000,[\d.]+,1.95996,[\d.]+,inf,,,datum,not testable$/,
    );
  });

  test('an exactly known offset is part of the level', async () => {
    const result = await resultOf(ISLANDS);
    const responses = result.model.responses.map((response) => ({ ...response, offset: Float64Array.of(0.5) }));
    const text = textOf(responsesTable({ ...result, model: { ...result.model, responses } }));
    expect(text.split('\n')[1]).toContain(',6.500000,');
  });
});

describe('residuals.csv, takes.csv and pairs.csv', () => {
  test('a shift of one take by 6 dB among all pairs of four units leaves 2 dB in it: redundancy 1/3, w = 2 / (0.5 √(1/3))', async () => {
    const text = textOf(residualsTable(await resultOf(SHIFTED)));
    const lines = text.split('\n');
    expect(lines[0]).toBe(
      'take,emitter,receiver,frequency_hz,level_db,fitted_db,residual_db,u_db,standardised,redundancy',
    );
    expect(lines[1]).toBe('T001,A,B,1000,6.000000,4.000000,2.000000,0.5,6.9282,0.333333');
    // Five pairs of four units at the second frequency, one degree of freedom, all levels 0.
    expect(lines[2]).toBe('T001,A,B,31500,0.000000,0.000000,0.000000,0.5,0.0000,0.25');
  });

  test('a reading that was not measured has no row; one that nothing checks has no standardised residual', async () => {
    const shifted = textOf(residualsTable(await resultOf(SHIFTED)));
    expect(shifted.trimEnd().split('\n')).toHaveLength(1 + 11);
    expect(shifted).not.toContain('T004,B,C,31500');
    const lines = textOf(residualsTable(await resultOf(ISLANDS))).split('\n');
    expect(lines[4]).toBe('T004,yonder,beyond,1000,4.000000,4.000000,0.000000,0.4,,0');
  });

  test('a reading over a path whose level is not known at its frequency keeps its row, with its level only', async () => {
    const path = {
      path: 'block',
      place: { file: 'paths.csv', line: 2 },
      frequency: Float64Array.of(900, 1100),
      level: Float64Array.of(1, 1),
      uncertainty: Float64Array.of(Number.NaN, Number.NaN),
    };
    const lines = ['A>B', 'A>C', 'B>C'].map((pair) => {
      const [emitter, receiver] = pair.split('>') as [string, string];
      return { emitter, receiver, levels: [1, 5], path: 'block' };
    });
    const options = { model: 'reciprocal', path: [path] } as const;
    const text = textOf(residualsTable(await resultOf({ frequencies: [1000, 2000], lines, options, u: 0.5 })));
    expect(text.split('\n')[2]).toBe('T001,A,B,2000,5.000000,,,0.5,,');
  });

  test('a take that was left out has no redundancy, and its residuals in units of u', async () => {
    const { solution, ...rest } = await resultOf(SHIFTED);
    const redundancy = solution.redundancy.map((share, cell) => (cell < 2 ? Number.NaN : share));
    const lines = textOf(residualsTable({ ...rest, solution: { ...solution, redundancy } })).split('\n');
    expect(lines[1]).toBe('T001,A,B,1000,6.000000,4.000000,2.000000,0.5,4.0000,');
    expect(lines[3]).toMatch(/^T002,A,C,1000,.*,0\.333333$/);
  });

  test('a take says residual, offset, worst band, what could hide, the verdict, what it reads like, and what to do', async () => {
    const result = await judgedResult(SHIFTED, [FLAGGED, { ...FLAGGED, verdict: 'not tested', explained: undefined }]);
    const lines = textOf(takesTable(result)).split('\n');
    expect(lines[0]).toBe(
      'take,file,line,emitter,receiver,session,emitter_mount,receiver_mount,emitter_seating,receiver_seating,repeat,readings,rms_residual_db,offset_db,u_offset_db,worst_from_hz,worst_to_hz,worst_db,redundancy,smallest_shift_db,p_value,verdict,reads_like,advice',
    );
    expect(lines[1]).toBe(
      'T001,bench.csv,2,A,B,,,,,,,2,3.000000,3.080000,0.12,891,1122,3.500000,,0.5,1e-9,flagged,"moved gain, +3.08 dB ± 0.24 dB","Check the gain settings; if a known gain moved, give it as gain_db, else take A > B again."',
    );
    expect(lines[2]).toMatch(/^T002,.*,1e-9,,,$/);
  });

  test('a pair says the same over its takes, with their number', async () => {
    const pairs: PairFinding[] = [
      {
        emitter: 'A',
        receiver: 'B',
        takes: [0],
        rmsResidual: 3,
        offset: 3.08,
        redundancy: 0.25,
        pValue: 1e-9,
        verdict: 'flagged',
      },
      {
        emitter: 'A',
        receiver: 'C',
        takes: [1, 2],
        rmsResidual: 0,
        offset: NONE,
        redundancy: NONE,
        pValue: NONE,
        verdict: 'not tested',
      },
    ];
    const result = await resultOf(SHIFTED);
    const text = textOf(pairsTable({ ...result, examination: { ...result.examination, pairs } }));
    expect(text.trimEnd().split('\n')).toEqual([
      'emitter,receiver,takes,rms_residual_db,offset_db,redundancy,p_value,verdict',
      'A,B,1,3.000000,3.080000,0.25,1e-9,flagged',
      'A,C,2,0.000000,,,,',
    ]);
  });
});

describe('where responses hold', () => {
  const holds: HoldFinding[] = [
    { ...HOLD, unit: 'A', from: 891, to: 1000, verdict: 'broken', partner: 2.5, low: 2, high: 3.25, pValue: 1e-5 },
    { ...HOLD, unit: 'A', from: 1000, to: 1122 },
    {
      ...HOLD,
      unit: 'B',
      from: 891,
      to: 1000,
      verdict: 'not testable',
      partner: NONE,
      low: NONE,
      high: NONE,
      pValue: NONE,
    },
  ];
  const held = async (example: Example) => {
    const result = await resultOf(example);
    return { ...result, examination: { ...result.examination, holds } };
  };

  test('holds.csv has a row a unit and band, empty where there is no figure', async () => {
    expect(textOf(holdsTable(await held(ISLANDS)))).toBe(
      [
        'unit,mount,band_from_hz,band_to_hz,partner_db,low_db,high_db,p_value,verdict',
        'A,,891,1000,2.5,2,3.25,0.00001,broken',
        'A,,1000,1122,0.1,0,0.4,1,holds',
        'B,,891,1000,,,,,not testable',
        '',
      ].join('\n'),
    );
  });

  test('responses.csv has the verdict of the band; an edge belongs to the upper one, and outside all bands the cell is empty', async () => {
    const lines = ISLANDS.lines.map((line) => ({ ...line, levels: [1, 1, 1] }));
    const text = textOf(responsesTable(await held({ ...ISLANDS, frequencies: [900, 1000, 1122], lines })));
    const mounting = text
      .split('\n')
      .slice(1, 5)
      .map((line) => line.split(',').at(-1));
    expect(mounting).toEqual(['broken', 'holds', '', 'not testable']);
  });
});

describe('every table', () => {
  const all = [responsesTable, takesTable, pairsTable, residualsTable, holdsTable, unusedTable];

  test('labels with commas, quotes, line ends, formulas and comment signs come back as they are', async () => {
    const unused = HOSTILE_LABELS.map((value, i) => ({
      file: value,
      line: i + 1,
      column: value,
      value,
      reason: value,
    }));
    const result = await resultOf({ ...HOSTILE, input: { unused } });
    const read = (text: string): Record<string, string>[] =>
      parse(text, { columns: true, comment: '#', comment_no_infix: true, record_delimiter: '\n' });
    const units = new Set(read(textOf(responsesTable(result))).map((row) => row.unit));
    expect([...units]).toEqual(HOSTILE_LABELS);
    for (const table of [takesTable, pairsTable, residualsTable]) {
      const rows = read(textOf(table(result)));
      expect([...new Set(rows.flatMap((row) => [row.emitter, row.receiver]))].sort()).toEqual(
        [...HOSTILE_LABELS].sort(),
      );
    }
    expect(read(textOf(unusedTable(result))).map((row) => row.value)).toEqual(HOSTILE_LABELS);
  });

  test('no cell is NaN, Infinity or a negative zero, and the same input gives the same bytes', async () => {
    for (const example of [ISLANDS, SHIFTED, DIRECTIONAL, FORTY]) {
      const result = await resultOf(example);
      const again = await resultOf(example);
      for (const table of all) {
        const text = textOf(table(result));
        expect(text).not.toMatch(/NaN|Infinity|undefined|(^|,)-0(\.0*)?(,|$)/m);
        expect(textOf(table(again))).toBe(text);
        expect(textOf(table(result))).toBe(text);
      }
    }
  });

  test('a table of more rows than one block of the writer loses and repeats none', async () => {
    const frequencies = Array.from({ length: 900 }, (_, f) => 1000 + f);
    const lines = ['A>B', 'A>C', 'B>C'].map((pair) => {
      const [emitter, receiver] = pair.split('>') as [string, string];
      return { emitter, receiver, levels: frequencies.map((f) => f / 100) };
    });
    const result = await resultOf({ frequencies, lines, options: { model: 'reciprocal' }, u: 1 });
    for (const [table, key] of [
      [responsesTable, 'unit'],
      [residualsTable, 'take'],
    ] as const) {
      const rows: Record<string, string>[] = parse(textOf(table(result)), { columns: true });
      expect(new Set(rows.map((row) => `${row[key]} ${row.frequency_hz}`)).size).toBe(2700);
      expect(rows).toHaveLength(2700);
    }
  });
});
