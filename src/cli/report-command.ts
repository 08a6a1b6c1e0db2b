import { join } from 'node:path';
import { solveCommand } from './solve-command.ts';

/**
 * Makes a result anew: repeats the run from the settings of its `summary.json` and replaces the folder as a whole, so that
 * page, pictures and tables always belong together. Nothing is replaced where an input file is not what it was.
 * @throws InputError where the folder holds no result, or an input file is gone or has changed.
 */
export function reportCommand(folder: string, quiet: boolean): Promise<number> {
  const request = {
    given: {},
    settingsFile: join(folder, 'summary.json'),
    out: undefined,
    json: false,
    strict: false,
    quiet,
  };
  return solveCommand(request, folder, { mustBeUnchanged: true });
}
