import { Command, CommanderError } from 'commander';
import { InputError } from '../quantity/input-fault.ts';
import { EXIT } from './exit-codes.ts';
import { addShapingOptions, readRequest } from './options.ts';
import { installedPackage } from './package-root.ts';
import { quietStreams, writeMessage, writeResult } from './terminal.ts';
import { UsageError } from './usage-error.ts';
import { addWhatifOptions, readWhatifRequest } from './whatif-options.ts';

const EXIT_HELP = `
Exit codes: 0 done, 1 done and something was flagged (with --strict), 2 wrong
usage, 3 input that cannot be used or a place that cannot be written, 4 nothing
can be told apart, 70 a defect of the program.`;

const SOLVE_HELP = `
DIR is new, empty, or an earlier result, which is then replaced; it is complete
or not there at all.

Examples:
  oddloop solve bench.csv --out result
  oddloop solve monday.csv tuesday.csv --out result --u 0.3 --grid 1/12
  oddloop solve --settings result/summary.json --out again
${EXIT_HELP}`;

const WHATIF_HELP = `
Examples:
  oddloop whatif --units 6 --budget-minutes 240 --sheet afternoon.csv
  oddloop whatif --units 8 --pattern all,ring,triangles,hub
  oddloop whatif plan.csv --add 3 --for worst
  oddloop whatif --from result --add 4 --sheet more.csv
${EXIT_HELP}`;

const REPORT_HELP = `
Start it in the folder in which RESULT was made: input files are looked for from
there. Where one of them has changed since, nothing is replaced (exit code 3).

Example:
  oddloop report result
${EXIT_HELP}`;

const COMPARE_HELP = `
Writes differences.csv, or matches.csv with --match, into RESULT.

Examples:
  oddloop compare result N01 N02
  oddloop compare result --match 2 --within 0.5 --band '2 kHz..20 kHz'
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
  addWhatifOptions(
    program
      .command('whatif')
      .summary('plan the bench day: what designs will deliver, suggestions, run sheet')
      .description('Says what designs will deliver before anything is mounted; suggests, orders and rehearses takes.'),
  )
    .addHelpText('after', WHATIF_HELP)
    .action(async (designs: string[], values: Record<string, unknown>) => {
      const request = readWhatifRequest(designs, values);
      const { whatifCommand } = await import('./whatif-command.ts');
      code = await whatifCommand(request);
    });
  program
    .command('report')
    .summary('make a result anew: report.html, its pictures and all tables')
    .description('Repeats the run of RESULT from its summary.json and replaces RESULT: page, pictures and tables.')
    .argument('<RESULT>', 'folder that solve wrote')
    .option('--quiet', 'no summary and no progress')
    .addHelpText('after', REPORT_HELP)
    .action(async (folder: string, values: Record<string, unknown>) => {
      const { reportCommand } = await import('./report-command.ts');
      code = await reportCommand(folder, values.quiet === true);
    });
  program
    .command('next')
    .summary('after a run: the takes most worth adding, and what each buys')
    .description('Repeats the run in RESULT and names the takes most worth adding, with what each buys.')
    .argument('<RESULT>', 'folder that solve wrote')
    .option('--target-db <U>', 'expanded uncertainty that the worst unit is to have')
    .option('--band <LO..HI>', "bands that count, such as '2 kHz..80 kHz'")
    .option('--most <N>', 'takes that may be added for the target (default: 20)')
    .option('--json', 'print JSON instead of text')
    .option('--quiet', 'no summary and no progress')
    .addHelpText('after', `\nExample:\n  oddloop next result --target-db 0.5\n${EXIT_HELP}`)
    .action(async (run: string, values: Record<string, unknown>) => {
      const { nextCommand, readNextRequest } = await import('./next-command.ts');
      code = await nextCommand(readNextRequest(run, values));
    });
  program
    .command('compare')
    .summary('differences between units of a result, and sets that match')
    .description('Says by how much units of RESULT differ, with U; or which sets of units match within a tolerance.')
    .argument('<RESULT>', 'folder that solve wrote')
    .argument('[UNIT...]', 'units to compare, each with each; for --match the units to choose from (default: all)')
    .option('--match <N>', 'list sets of N units that agree')
    .option('--within <DB>', 'largest difference within such a set')
    .option('--band <LO..HI>', "frequencies that count, such as '2 kHz..80 kHz'")
    .option('--seed <N>', 'seed of the draws behind a probability (default: 1)')
    .option('--quiet', 'no table on the terminal')
    .addHelpText('after', COMPARE_HELP)
    .action(async (result: string, units: string[], values: Record<string, unknown>) => {
      const { compareCommand, readCompareRequest } = await import('./compare-command.ts');
      code = await compareCommand(readCompareRequest(result, units, values));
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
