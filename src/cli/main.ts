import { Command, CommanderError } from 'commander';
import { InputError } from '../quantity/input-fault.ts';
import { EXIT } from './exit-codes.ts';
import { addShapingOptions, readRequest } from './options.ts';
import { installedPackage } from './package-root.ts';
import { quietStreams, writeMessage, writeResult } from './terminal.ts';
import { UsageError } from './usage-error.ts';

const EXIT_HELP = `
Exit codes: 0 done, 2 wrong usage, 3 input that cannot be used or a place that
cannot be written, 4 nothing can be told apart, 70 a defect of the program.`;

const SOLVE_HELP = `
DIR is new, empty, or an earlier result, which is then replaced; it is complete
or not there at all.

Examples:
  oddloop solve bench.csv --out result
  oddloop solve monday.csv tuesday.csv --out result --u 0.3 --grid 1/12
  oddloop solve --settings result/summary.json --out again
${EXIT_HELP}`;

/**
 * Runs one command line.
 * @param argv what follows the program's name.
 * @returns the exit code. Messages have gone to stderr, results to stdout.
 */
export async function run(argv: readonly string[]): Promise<number> {
  quietStreams();
  try {
    return await dispatch(argv);
  } catch (error) {
    return await explain(error);
  }
}

async function dispatch(argv: readonly string[]): Promise<number> {
  let code: number = EXIT.done;
  let printed = '';
  const program = new Command('oddloop')
    .description('Separates the responses of transducers that can only be measured in pairs.')
    .version(installedPackage().version)
    .addHelpText('after', `${EXIT_HELP}\n\nTo begin: oddloop demo`)
    .exitOverride()
    .configureOutput({
      writeOut: (text) => {
        printed += text;
      },
      writeErr: (text) => writeMessage(text.trimEnd()),
      outputError: (text) => writeMessage(text.trimEnd().replace(/^error: /, 'oddloop: ')),
    })
    .showHelpAfterError('oddloop --help lists the commands; oddloop COMMAND --help its options.');

  // The commands are loaded only when they run: help and wrong usage answer at once.
  program
    .command('demo')
    .summary('write the demo set, solve it, and say where to look')
    .description('Writes the demo set to DIR, solves it to DIR/result, and says where to look.')
    .argument('[DIR]', 'folder to write to', 'oddloop-demo')
    .option('--quiet', 'no summary and no progress')
    .action(async (folder: string, values: Record<string, unknown>) => {
      const { demoCommand } = await import('./demo-command.ts');
      code = await demoCommand(demoFolder(folder), values.quiet === true);
    });
  addShapingOptions(
    program
      .command('solve')
      .summary('separate the responses and write all outputs')
      .description('Separates the responses of the units, with uncertainties, and writes all outputs to DIR.')
      .option('--out <DIR>', 'folder to write to (required)'),
  )
    .option('--strict', 'end with 1 when anything is flagged')
    .option('--quiet', 'no summary and no progress')
    .addHelpText('after', SOLVE_HELP)
    .action(async (files: string[], values: Record<string, unknown>) => {
      const request = readRequest(files, values, { writes: true, name: 'solve' });
      const { solveCommand } = await import('./solve-command.ts');
      code = await solveCommand(request, request.out as string);
    });
  addShapingOptions(
    program
      .command('inspect')
      .summary('what files hold, what is wrong with them, what can be told apart')
      .description('Says what the files hold, what is wrong with them, and what can be told apart. Writes nothing.'),
  )
    .option('--quiet', 'no progress')
    .addHelpText('after', `\nExample:\n  oddloop inspect bench.csv\n${EXIT_HELP}`)
    .action(async (files: string[], values: Record<string, unknown>) => {
      const request = readRequest(files, values, { writes: false, name: 'inspect' });
      const { inspectCommand } = await import('./inspect-command.ts');
      code = await inspectCommand(request);
    });

  try {
    await program.parseAsync(argv, { from: 'user' });
  } catch (error) {
    if (!(error instanceof CommanderError)) throw error;
    // The parser has already told what is wrong; help that was asked for is no error.
    code = error.exitCode === 0 ? EXIT.done : EXIT.usage;
    const word = error.code === 'commander.unknownCommand' ? argv.find((text) => !text.startsWith('-')) : undefined;
    if (word?.includes('.')) writeMessage(`To solve files: oddloop solve ${word} --out result`);
  }
  if (printed !== '') await writeResult(printed);
  return code;
}

function demoFolder(folder: string): string {
  if (folder.trim() !== '') return folder;
  throw new UsageError([
    `DIR: found ${JSON.stringify(folder)}; expected the name of a folder. Example: oddloop demo my-demo`,
  ]);
}

async function explain(error: unknown): Promise<number> {
  if (error instanceof UsageError) {
    writeMessage(error.troubles.map((trouble) => `oddloop: ${trouble}`).join('\n'));
    writeMessage('oddloop COMMAND --help lists the options.');
    return EXIT.usage;
  }
  if (error instanceof InputError) {
    const { faultList } = await import('../report/fault-list.ts');
    writeMessage(faultList(error.faults).trimEnd());
    return EXIT.input;
  }
  writeMessage(error instanceof Error ? (error.stack ?? error.message) : String(error));
  writeMessage(
    `This is a defect of oddloop ${installedPackage().version} (Node ${process.version}), not of your files. Please report it with the lines above.`,
  );
  return EXIT.defect;
}
