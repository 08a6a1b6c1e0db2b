import { accessSync, constants, type Dirent, lstatSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { lstat, realpath } from 'node:fs/promises';
import { basename, dirname, join, resolve, sep } from 'node:path';
import { InputError } from '../quantity/input-fault.ts';

/** What the place of a result has to be. */
export const EXPECTED_PLACE =
  'a folder that is new, empty, or an earlier result of oddloop, in a place that can be written';

/** Every file that a result may hold. A folder with any other file in it is not replaced. */
const RESULT_FILES: ReadonlySet<string> = new Set([
  'responses.csv',
  'takes.csv',
  'pairs.csv',
  'residuals.csv',
  'loops.csv',
  'scatter.csv',
  'holds.csv',
  'mounts.csv',
  'budget.csv',
  'differences.csv',
  'matches.csv',
  'unused.csv',
  'summary.json',
  'covariance.json',
  'report.html',
]);

/** The only folder in a result, and what its files end in. */
const PICTURES = { folder: 'figures', ending: '.svg' };

/** Full path of the folder named. Symbolic links are followed, so that what is replaced is the folder and not the link. */
export async function targetOf(name: string): Promise<string> {
  const path = resolve(name);
  const isThere = await lstat(path).then(
    () => true,
    (error: NodeJS.ErrnoException) => {
      if (error.code === 'ENOENT') return false;
      throw error;
    },
  );
  if (isThere) return realpath(path);
  const parent = await realpath(dirname(path)).catch((error: NodeJS.ErrnoException) => {
    if (error.code !== 'ENOENT') throw error;
    throw refuse(name, `no folder ${dirname(name)} to put it in`, 'Make that folder first, or choose another one.');
  });
  return join(parent, basename(path));
}

function refuse(name: string, found: string, remedy = 'Choose another folder.'): InputError {
  return new InputError([{ place: { file: name }, found, expected: EXPECTED_PLACE, remedy }]);
}

/** @throws InputError where a file that the run reads lies in the folder, or the run itself stands in it. */
export function refuseInputsInside(name: string, target: string, inputs: readonly string[]): void {
  const inside = inputs.find((input) => resolve(input).startsWith(target + sep));
  if (inside !== undefined) throw refuse(name, `the input file ${basename(inside)} in it`);
  if ((process.cwd() + sep).startsWith(target + sep)) {
    throw refuse(name, 'the folder that you are in', 'Name a new folder inside it.');
  }
}

/**
 * @returns what stands there now.
 * @throws InputError where it may not be replaced.
 */
export function refuseOccupied(name: string, target: string, replaceResult: boolean): 'nothing' | 'empty' | 'result' {
  const stat = lstatSync(target, { throwIfNoEntry: false });
  if (stat === undefined) return 'nothing';
  if (!stat.isDirectory()) throw refuse(name, 'a file of that name');
  if (stat.dev !== statSync(dirname(target)).dev) {
    throw refuse(name, 'a disk of its own, which cannot be replaced as a whole', 'Name a new folder inside it.');
  }
  const entries = readdirSync(target, { withFileTypes: true });
  if (entries.length === 0) return 'empty';
  const foreign = entries.filter((entry) => !isOfResult(target, entry)).map(({ name }) => name);
  if (foreign.length > 0) {
    const more = foreign.length > 3 ? ` and ${foreign.length - 3} more` : '';
    throw refuse(name, `a folder with other things in it (${foreign.sort().slice(0, 3).join(', ')}${more})`);
  }
  if (!holdsSummary(target)) throw refuse(name, 'a folder without a summary.json of oddloop, but not empty');
  if (!replaceResult) throw refuse(name, 'an earlier result');
  // The superuser could replace it nevertheless; but a result that was made read-only is to stay.
  if ((stat.mode & 0o222) === 0) throw refuse(name, 'an earlier result that is read-only');
  accessSync(target, constants.W_OK);
  return 'result';
}

function isOfResult(folder: string, entry: Dirent): boolean {
  if (entry.isFile()) return RESULT_FILES.has(entry.name);
  if (!entry.isDirectory() || entry.name !== PICTURES.folder) return false;
  const pictures = readdirSync(join(folder, entry.name), { withFileTypes: true });
  return pictures.every((picture) => picture.isFile() && picture.name.endsWith(PICTURES.ending));
}

function holdsSummary(folder: string): boolean {
  try {
    const summary: unknown = JSON.parse(readFileSync(join(folder, 'summary.json'), 'utf8'));
    const schema = (summary as { schema?: unknown } | null)?.schema;
    return typeof schema === 'string' && schema.startsWith('oddloop-summary/');
  } catch {
    return false;
  }
}
