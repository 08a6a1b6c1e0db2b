import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { InputError } from '../quantity/input-fault.ts';
import { openOutputFolder } from './output-folder.ts';
import { installedPackage } from './package-root.ts';
import { solveCommand } from './solve-command.ts';
import { writeResult } from './terminal.ts';

/** The files of the demo set. */
const DEMO_FILES = ['pairs.csv', 'README.md', 'truth.json'] as const;

interface DemoFile {
  readonly name: string;
  readonly text: string;
}

/** Writes the demo set to the folder, solves it, and says where to look. */
export async function demoCommand(folder: string, quiet: boolean): Promise<number> {
  await writeDemoSet(folder, await demoSet());
  const code = await solveCommand(
    {
      given: { files: [join(folder, 'pairs.csv')] },
      settingsFile: undefined,
      out: undefined,
      json: false,
      strict: false,
      quiet,
    },
    join(folder, 'result'),
  );
  if (!quiet) await writeResult(whereToLook(folder));
  return code;
}

async function demoSet(): Promise<DemoFile[]> {
  const { root } = installedPackage();
  return Promise.all(
    DEMO_FILES.map(async (name) => ({ name, text: await readFile(join(root, 'data-demo', name), 'utf8') })),
  );
}

// A demo set that is already there, whole and unchanged, is used as it is; anything else in the folder stops the run.
async function writeDemoSet(folder: string, files: readonly DemoFile[]): Promise<void> {
  const present = await readdir(folder).catch((): string[] => []);
  if (!DEMO_FILES.some((name) => present.includes(name))) {
    const output = await openOutputFolder(folder, { replaceResult: false, inputs: [] });
    await output.write(files.map(({ name, text }) => ({ name, chunks: () => [text] })));
    return;
  }
  for (const { name, text } of files) {
    const there = await readFile(join(folder, name), 'utf8').catch(() => undefined);
    if (there === text) continue;
    throw new InputError([
      {
        place: { file: join(folder, name) },
        found:
          there === undefined ? 'no such file in a folder that holds other files of the demo set' : 'a changed file',
        expected: 'a new or empty folder, or the demo set as it was written',
        remedy: 'Name another folder, such as: oddloop demo another-demo',
      },
    ]);
  }
}

function whereToLook(folder: string): string {
  return [
    '',
    'The demo set',
    `  ${join(folder, 'README.md')}  what the bench was, and what is hidden in the takes`,
    `  ${join(folder, 'pairs.csv')}  the takes, a row a reading`,
    `  ${join(folder, 'truth.json')}  the responses it was made from, to compare with`,
    `  ${join(folder, 'result')}  what oddloop makes of it: open report.html in a browser`,
    '',
  ].join('\n');
}
