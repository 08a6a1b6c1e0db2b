import type { MathNode } from 'mathjs';
import { InputError, type InputFault } from '../quantity/input-fault.ts';
import { formulaName } from './column-vocabulary.ts';
import { list } from './table-header.ts';

/** A formula that makes a level in dB from the numbers of a row. */
export interface LevelFormula {
  readonly text: string;
  /** The columns that it names, in the order of first appearance. */
  readonly names: readonly string[];
  /** The level, from a number for each of `names` in their order; not finite where the formula gives none. */
  level(values: ArrayLike<number>): number;
}

/** What a formula may call: functions of numbers. Everything else of the expression language is refused. */
const FUNCTIONS: ReadonlySet<string> = new Set(
  'abs acos asin atan atan2 cbrt ceil cos cosh exp floor hypot log log10 log1p log2 max min mod pow round sign sin sinh sqrt square tan tanh'.split(
    ' ',
  ),
);

const CONSTANTS: ReadonlyMap<string, number> = new Map([
  ['pi', Math.PI],
  ['e', Math.E],
]);

const NODES: ReadonlySet<string> = new Set([
  'ConstantNode',
  'SymbolNode',
  'OperatorNode',
  'ParenthesisNode',
  'FunctionNode',
  'ConditionalNode',
  'RelationalNode',
]);

const EXAMPLE = '`20*log10(out_mv/in_mv) - gain_db`, made of columns, numbers, + − * / ^ and functions such as log10';

/**
 * Compiles the formula of `--level`, once for all files. The library is loaded here and nowhere else, since it takes
 * half a second. A formula is arithmetic only: no assignment, text, list, unit, nor a function beyond plain mathematics
 * (`import`, `createUnit`, `evaluate`, `parse` and the like cannot be reached).
 * @throws InputError for a formula that cannot be read.
 */
export async function compileLevelFormula(text: string): Promise<LevelFormula> {
  const { create, all } = await import('mathjs/number');
  const math = create(all!);
  let root: MathNode;
  try {
    root = math.parse(text);
  } catch (trouble) {
    throw formulaError(`\`${text}\`, which cannot be read: ${(trouble as Error).message}`);
  }
  const names: string[] = [];
  root.traverse((node, path) => {
    if (!NODES.has(node.type)) throw formulaError(`\`${node.toString()}\` in the formula \`${text}\``);
    if (node.type === 'ConstantNode' && typeof (node as unknown as { value: unknown }).value !== 'number') {
      throw formulaError(`\`${node.toString()}\` in the formula \`${text}\``);
    }
    if (node.type === 'FunctionNode' && !FUNCTIONS.has(calledName(node))) {
      throw formulaError(`the function \`${calledName(node)}\` in the formula \`${text}\``, [...FUNCTIONS]);
    }
    if (node.type !== 'SymbolNode' || path === 'fn') return;
    const name = (node as unknown as { name: string }).name;
    if (!names.includes(name)) names.push(name);
  });
  const code = root.compile();
  const columns = names.filter((name) => !CONSTANTS.has(name));
  // A map rather than an object: a column may bear any name, and the library wraps objects anew at each call.
  const scope = new Map<string, number>(CONSTANTS);
  return {
    text,
    names: columns.map(formulaName),
    level(values) {
      for (let i = 0; i < columns.length; i++) scope.set(columns[i]!, values[i]!);
      const result: unknown = code.evaluate(scope);
      return typeof result === 'number' ? result : Number.NaN;
    },
  };
}

function calledName(node: object): string {
  const { fn } = node as { fn: { name?: string } | string };
  return typeof fn === 'string' ? fn : (fn.name ?? '');
}

function formulaError(found: string, functions?: readonly string[]): InputError {
  return new InputError([
    {
      place: { file: '--level' },
      found,
      expected: functions === undefined ? EXAMPLE : `one of the functions ${functions.join(', ')}`,
      remedy: 'Correct the formula.',
    },
  ]);
}

/** Refuses a formula that names a column which is not there, or is there twice. */
export function requireColumns(
  formula: LevelFormula,
  place: { readonly file: string; readonly line: number },
  available: readonly string[],
): void {
  const faults = formula.names.flatMap((name): InputFault[] => {
    const count = available.filter((other) => other === name).length;
    if (count === 1) return [];
    return [
      {
        place: { file: place.file, line: place.line, column: name },
        found: `${count === 0 ? 'no column' : `${count} columns`} \`${name}\`, which the formula of --level names`,
        expected: `one of ${list(available.filter((other) => other !== ''))}`,
        remedy: 'Correct the formula or the header.',
      },
    ];
  });
  if (faults.length > 0) throw new InputError(faults);
}
