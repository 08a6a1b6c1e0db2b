import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { ColumnRule } from './column-vocabulary.ts';
import { type EntryRow, readEntries } from './read-entries.ts';
import type { SavedResponse, SavedResult } from './saved-result.ts';
import type { Source } from './source.ts';

/** The files of a result folder that hold its responses. */
export interface ResultSources {
  readonly responses: Source;
  readonly covariance: Source;
  readonly summary: Source;
}

type ResponseColumn =
  | 'unit'
  | 'mount'
  | 'role'
  | 'frequency'
  | 'level'
  | 'uncertainty'
  | 'dof'
  | 'reseat'
  | 'partner'
  | 'status';

const hertz = (unit: string) => (unit === 'hz' ? 1 : undefined);
const decibels = (unit: string) => (unit === 'db' ? 1 : undefined);

const COLUMNS: readonly ColumnRule<ResponseColumn>[] = [
  { name: 'unit', title: 'unit', word: 'unit' },
  { name: 'mount', title: 'mount', word: 'mount' },
  { name: 'role', title: 'role', word: 'role' },
  { name: 'frequency', title: 'frequency_hz', word: 'frequency', unit: hertz },
  { name: 'level', title: 'level_db', word: 'level', unit: decibels },
  { name: 'reseat', title: 'u_reseat_db', word: 'ureseat', unit: decibels },
  { name: 'partner', title: 'u_partner_db', word: 'upartner', unit: decibels },
  { name: 'uncertainty', title: 'u_db', word: 'u', unit: decibels },
  { name: 'dof', title: 'dof', word: 'dof' },
  { name: 'status', title: 'status', word: 'status' },
];

const NUMBERS = ['level', 'uncertainty', 'reseat', 'partner'] as const;
const REMEDY = 'Name a folder that `oddloop solve` wrote, as it wrote it.';

/**
 * Reads the responses of a result with their covariance.
 * @throws InputError where a file is missing or is not what `solve` writes.
 */
export async function readResult({ responses, covariance, summary }: ResultSources): Promise<SavedResult> {
  const { entries } = await readEntries(responses, {
    rules: COLUMNS,
    required: ['unit', 'role', 'frequency', 'level', 'uncertainty', 'dof', 'status'],
    numeric: ['frequency', ...NUMBERS],
    decibels: NUMBERS,
    example: 'responses.csv as `oddloop solve` writes it',
    layout: 'result',
    entry: rowOf,
  });
  const kept = new Map<string, SavedResponse>();
  for (const { key, response } of entries) kept.set(key, response);
  const keys = [...kept.keys()];
  const frequencies = Float64Array.from(new Set(entries.map(({ frequency }) => frequency))).sort();
  const position = new Map(Array.from(frequencies, (frequency, f) => [frequency, f]));
  const blank = () => new Float64Array(frequencies.length * keys.length).fill(Number.NaN);
  const columns = { level: blank(), uncertainty: blank(), reseat: blank(), partner: blank(), dof: blank() };
  const isDatum = new Array<boolean>(columns.level.length).fill(false);
  const index = new Map(keys.map((key, r) => [key, r]));
  for (const { key, frequency, numbers, status } of entries) {
    const cell = position.get(frequency)! * keys.length + index.get(key)!;
    for (const name of [...NUMBERS, 'dof'] as const) columns[name][cell] = numbers[name];
    isDatum[cell] = status === 'datum';
  }
  const { coverage } = await settingsOf(summary);
  return {
    responses: [...kept.values()],
    frequencies,
    levels: columns.level,
    uncertainty: columns.uncertainty,
    reseat: columns.reseat,
    partner: columns.partner,
    dof: columns.dof,
    isDatum,
    covariance: await covarianceOf(covariance, position, index),
    coverage,
  };
}

function rowOf(row: EntryRow<ResponseColumn>) {
  const [unit, mount, role] = [row.text('unit'), row.text('mount'), row.text('role')];
  const frequency = row.number('frequency');
  if (frequency === undefined || !isRole(role)) {
    row.fault(isRole(role) ? 'frequency' : 'role', `\`${role}\``, 'a row as `oddloop solve` writes it', REMEDY);
    return undefined;
  }
  const dof = row.text('dof');
  return {
    key: JSON.stringify([unit, mount, role]),
    response: { unit, mount, role },
    frequency,
    status: row.text('status'),
    numbers: {
      level: row.number('level') ?? Number.NaN,
      uncertainty: row.number('uncertainty') ?? Number.NaN,
      reseat: row.number('reseat') ?? Number.NaN,
      partner: row.number('partner') ?? Number.NaN,
      dof: dof === 'inf' ? Number.POSITIVE_INFINITY : dof === '' ? Number.NaN : Number(dof),
    },
  };
}

function isRole(text: string): text is SavedResponse['role'] {
  return text === 'emit' || text === 'receive' || text === 'both';
}

async function settingsOf(source: Source): Promise<{ readonly coverage: number }> {
  const record = await jsonOf(source, 'oddloop-summary/');
  const coverage = (record.uncertainty as { coverage?: unknown } | undefined)?.coverage;
  if (typeof coverage === 'number' && coverage > 0 && coverage < 1) return { coverage };
  throw faultOf(source, 'no coverage probability');
}

interface SavedBlock {
  readonly frequencies_hz: readonly number[];
  readonly scales_db2: readonly (number | null)[];
  readonly responses: readonly number[];
  readonly triangle: readonly number[];
  readonly common_triangle_db2: readonly number[] | null;
}

async function covarianceOf(
  source: Source,
  position: ReadonlyMap<number, number>,
  index: ReadonlyMap<string, number>,
): Promise<SavedResult['covariance']> {
  const record = await jsonOf(source, 'oddloop-covariance/');
  const { responses, blocks } = record as { responses?: unknown; blocks?: unknown };
  if (!Array.isArray(responses) || !Array.isArray(blocks)) throw faultOf(source, 'no blocks of covariances');
  const numberOf = responses.map((response: { unit: string; mount: string | null; role: string }) =>
    index.get(JSON.stringify([response.unit, response.mount ?? '', response.role])),
  );
  const at = new Map<number, { block: SavedBlock; scale: number; place: Map<number, number> }>();
  for (const block of blocks as SavedBlock[]) {
    const place = new Map(block.responses.map((response, k) => [numberOf[response] ?? -1, k]));
    block.frequencies_hz.forEach((frequency, k) => {
      const f = position.get(frequency);
      if (f !== undefined) at.set(f, { block, scale: block.scales_db2[k] ?? Number.NaN, place });
    });
  }
  return (f, a, b) => {
    const found = at.get(f);
    const [i, j] = [found?.place.get(a), found?.place.get(b)];
    if (found === undefined || i === undefined || j === undefined) return Number.NaN;
    const [row, column] = i > j ? [i, j] : [j, i];
    const entry = (row * (row + 1)) / 2 + column;
    return found.scale * found.block.triangle[entry]! + (found.block.common_triangle_db2?.[entry] ?? 0);
  };
}

async function jsonOf(source: Source, schema: string): Promise<Readonly<Record<string, unknown>>> {
  const decoder = new TextDecoder();
  let text = '';
  for await (const piece of source.open()) text += decoder.decode(piece, { stream: true });
  let value: unknown;
  try {
    value = JSON.parse(text + decoder.decode());
  } catch {
    throw faultOf(source, 'no JSON');
  }
  const found = (value as { schema?: unknown } | null)?.schema;
  if (typeof found === 'string' && found.startsWith(schema)) return value as Readonly<Record<string, unknown>>;
  throw faultOf(source, `a file without the schema ${schema}…`);
}

function faultOf({ name }: Source, found: string): InputError {
  const fault: InputFault = { place: { file: name }, found, expected: 'a file of a result', remedy: REMEDY };
  return new InputError([fault]);
}
