import { Command, CommanderError, InvalidArgumentError, Option } from 'commander';
import { EXIT, EXIT_MEANING } from '../../shared/contract/exit-codes.ts';
import { SOFTWARE } from '../../shared/service/software.ts';
import { printError } from './print-error.ts';

/** Options shared by `run` and `plan`. */
export interface BasinOptions {
  readonly set: Readonly<Record<string, string>>;
  readonly out?: string;
  readonly threads?: number;
  readonly log: 'text' | 'json';
}

const exitTable = Object.entries(EXIT_MEANING)
  .map(([code, meaning]) => `  ${code.padStart(3)}  ${meaning}`)
  .join('\n');

/**
 * Runs the command line. Commands are loaded when they are called, so that `--help` is quick.
 *
 * @returns the exit code
 */
export async function main(argv: readonly string[]): Promise<number> {
  let exit: number = EXIT.ok;
  const act =
    <A extends unknown[]>(load: () => Promise<(...args: A) => Promise<number>>) =>
    async (...args: A) => {
      exit = await (await load())(...args);
    };

  const program = new Command('basinloom')
    .description('Seamless basin-wide evapotranspiration from satellite scenes and weather, tile by tile.')
    .version(SOFTWARE.version)
    .exitOverride()
    .configureHelp({ sortSubcommands: false })
    .addHelpText(
      'after',
      `
Examples:
  basinloom demo                               make an invented basin in ./demo and run it
  basinloom plan basin.yaml                    what would be done; computes nothing
  basinloom run basin.yaml                     do it, or go on where a stopped run was
  basinloom run basin.yaml --set grid.tile=256 --out other
  basinloom status out                         how a run stands or ended

Exit codes:
${exitTable}`,
    );

  basinCommand(program, 'run', 'run a basin: scenes in, mosaics, tables and report out')
    .option('--failed', 'only if the last run set something aside: try that again')
    .addHelpText(
      'after',
      `
Examples:
  basinloom run basin.yaml
  basinloom run basin.yaml --threads 4 --log json 2> run.log
  basinloom run basin.yaml --set method.adjust.use=false --out unadjusted

Ctrl-C stops after the jobs in hand; the same command goes on from there.`,
    )
    .action(act(async () => (await import('./commands/run.ts')).run));

  basinCommand(program, 'plan', 'show passes, coverage, jobs and disk; compute nothing')
    .addHelpText('after', '\nExample:\n  basinloom plan basin.yaml --set grid.resolution=60')
    .action(act(async () => (await import('./commands/plan.ts')).plan));

  program
    .command('status')
    .description('show how a run stands or how it ended')
    .argument('[out]', 'output folder of the run', './out')
    .option('--run <id>', 'a certain run; default: the latest')
    .option('--json', 'print the record as JSON')
    .addHelpText('after', '\nExamples:\n  basinloom status demo/out\n  basinloom status out --json')
    .action(act(async () => (await import('./commands/status.ts')).status));

  program
    .command('failures')
    .description('list what a run set aside, why, and what to do about it')
    .argument('[out]', 'output folder of the run', './out')
    .option('--run <id>', 'a certain run; default: the latest')
    .option('--json', 'print the record as JSON')
    .addHelpText('after', '\nExamples:\n  basinloom failures demo/out\n  basinloom run basin.yaml --failed')
    .action(act(async () => (await import('./commands/failures.ts')).failures));

  const schedule = program
    .command('schedule')
    .description('regular runs, carried by the coordinator service')
    .addHelpText(
      'after',
      `
Examples:
  basinloom schedule add monthly basin.yaml --cron "0 6 3 * *" --period last-month
  basinloom schedule list
  basinloom schedule remove monthly

Times are UTC. A period gets one run, however often its schedule fires.`,
    );
  const scheduleCommand = (name: string, description: string) =>
    schedule
      .command(name)
      .description(description)
      .option('--home <place>', 'home of the coordinator; default: BASINLOOM_HOME or ./coordinator')
      .option('--redis <url>', 'Redis of the coordinator; default: BASINLOOM_REDIS_URL');
  scheduleCommand('add', 'add a schedule, or change the one of that name')
    .argument('<name>')
    .argument('<basin.yaml>', 'the basin file, as the coordinator reaches it')
    .requiredOption('--cron <fields>', 'minute, hour, day of month, month, day of week, in UTC')
    .addOption(periodOption())
    .option('--out <folder>', 'output folder instead of the one in the basin file')
    .option('--set <key=value>', 'change one value of the basin file; may be given again', collectSetting, {})
    .action(act(async () => (await import('./commands/schedule.ts')).addSchedule));
  scheduleCommand('list', 'show the schedules and when each fires next')
    .option('--json', 'print them as JSON')
    .action(act(async () => (await import('./commands/schedule.ts')).listSchedules));
  scheduleCommand('remove', 'take a schedule away; its runs stay')
    .argument('<name>')
    .action(act(async () => (await import('./commands/schedule.ts')).removeSchedule));

  program
    .command('demo')
    .description('write an invented basin with its scenes and weather, run it, and compare with its truth')
    .argument('[folder]', 'where to put it', './demo')
    .option('--seed <number>', 'another invented basin', parseInteger, 1)
    .addOption(sizeOption())
    .option('--threads <number>', 'worker threads', parseInteger)
    .addOption(logOption())
    .addHelpText('after', '\nExamples:\n  basinloom demo\n  basinloom demo elsewhere --seed 7')
    .action(act(async () => (await import('./commands/demo.ts')).demo));

  program
    .command('schema')
    .description('print the JSON Schema of the basin file, for editors')
    .addHelpText('after', '\nExample:\n  basinloom schema > basin.schema.json')
    .action(act(async () => (await import('./commands/schema.ts')).schema));

  try {
    await program.parseAsync(argv);
    return exit;
  } catch (error) {
    if (error instanceof CommanderError) return error.exitCode === 0 ? EXIT.ok : EXIT.usage;
    return printError(error);
  }
}

function basinCommand(program: Command, name: string, description: string): Command {
  return program
    .command(name)
    .description(description)
    .argument('<basin.yaml>', 'the basin file')
    .option('--out <folder>', 'output folder instead of the one in the basin file')
    .option('--set <key=value>', 'change one value of the basin file; may be given again', collectSetting, {})
    .option('--threads <number>', 'worker threads; default: all processors', parseInteger)
    .addOption(logOption());
}

const logOption = () => new Option('--log <form>', 'messages on stderr').choices(['text', 'json']).default('text');
const periodOption = () =>
  new Option('--period <which>', 'the days that a run covers')
    .choices(['last-month', 'month-to-date', 'last-ten-days', 'as-written'])
    .default('last-month');
const sizeOption = () =>
  new Option('--size <size>', 'how large a basin').choices(['demo', 'small', 'tiny']).default('demo');

function collectSetting(value: string, settings: Record<string, string>): Record<string, string> {
  const [, key, setting] = /^([\w.-]+)=(.*)$/s.exec(value) ?? [];
  if (!key) throw new InvalidArgumentError('expected key=value, for example grid.tile=256');
  return { ...settings, [key]: setting };
}

function parseInteger(value: string): number {
  const number = Number(value);
  if (!Number.isInteger(number) || number < 1) throw new InvalidArgumentError('expected a whole number from 1');
  return number;
}
