import { Command, CommanderError } from 'commander';
import { converterOptions, publishedRules, schemaNames, options as settings } from '../index.js';
import { printSchema, printTechnology } from './catalogue.js';
import { check } from './check.js';
import type { CheckFlags } from './check.js';
import { compareFiles } from './compare.js';
import type { CompareFlags } from './compare.js';
import { exportFiles } from './export.js';
import type { ExportFlags } from './export.js';
import type { TableRow } from '../index.js';
import { UsageError, exit } from './fault.js';
import { formats } from './files.js';
import type { Io } from './io.js';
import { pattern } from './pattern.js';
import type { PatternFlags } from './pattern.js';
import { place } from './place.js';
import type { PlaceFlags } from './place.js';
import { size } from './size.js';
import type { SizeFlags } from './size.js';

/** Commands and options that a later version brings: refused by name rather than taken for a slip of the pen. */
const laterCommands = ['simulate'];
const laterOptions: Readonly<Record<string, readonly string[]>> = {
  compare: ['--out'],
};

const examples: Readonly<Record<string, readonly string[]>> = {
  place: ['steelyard place --bits 8 --effort quick --out demo'],
  check: ['steelyard place --bits 4 --out demo', 'steelyard check demo/cdac4.floorplan.json demo/cdac4.polygons.json'],
  export: [
    'steelyard place --bits 4 --out demo',
    'steelyard export demo/cdac4.floorplan.json --to gds,lef,spice --flat --devices merged --out handover',
  ],
  pattern: ['steelyard pattern chessboard --bits 6'],
  compare: [
    'steelyard pattern spiral --bits 6 --out spiral.floorplan.json',
    'steelyard pattern interleaved --bits 6 --out interleaved.floorplan.json',
    'steelyard compare spiral.floorplan.json interleaved.floorplan.json',
  ],
  size: [
    'steelyard size --bits 12 --full-scale 1 --differential --sample-rate 1 --out adc.array.json',
    'steelyard size --bits 10 --explain',
    'steelyard size --ratio 2.314',
  ],
  schema: ['steelyard schema array'],
  technology: ['steelyard technology parallel-plate'],
};

const plain = (words: string): string => words.replace(/[`"]/g, '');

/** The keys of a table that are on the command line too, each with its choices and its default in the help. */
function tableFlags(command: Command, table: readonly TableRow[]): void {
  for (const { flag, help, values, standard } of table) {
    if (flag === undefined) continue;
    const choice = values.startsWith('`"') ? `: ${plain(values)}` : '';
    command.option(flag, help + choice + (standard === '-' ? '' : ` (default: ${plain(standard)})`));
  }
}

/** The commands, their options and their help; `finish` receives what the chosen one ends with. */
function build(io: Io, version: string, finish: (code: number) => void): Command {
  const program = new Command('steelyard')
    .description('Binary-weighted capacitor arrays: placed, wired, checked and drawn.')
    .version(version, '--version', 'print the version')
    .helpOption('--help', 'print this help')
    .helpCommand(false)
    .addHelpText(
      'after',
      "\nsteelyard COMMAND --help tells a command's options and shows an example.\nExample:\n  steelyard place --bits 8",
    );
  const command = (name: string, description: string): Command =>
    program
      .command(name)
      .description(description)
      .helpOption('--help', 'print this help')
      .addHelpText('after', `\nExample:\n${(examples[name] ?? []).map((line) => `  ${line}`).join('\n')}`);

  const placing = command(
    'place',
    'Places an array, wires and draws it, and writes its files. Ctrl-C saves the best placement so far (of more than 256 units without wires).',
  )
    .argument('[FILE]', 'array file; or a floorplan file: its cells are kept and wired anew')
    .option('--out <folder>', "where the files go (default: a folder of the array's name)");
  tableFlags(placing, settings);
  placing
    .option('--floorplan-only', 'place and analyse, draw no wires')
    .option('--pitch <X,Y>', 'pitch in micrometres, with --floorplan-only')
    .option('--candidates <count>', 'several floorplans, 2 to 16, none dominated by another: NAME-1, NAME-2, ...')
    .option('--samples <count>', 'arrays drawn at random for the yield, where there are limits (default: 100000)')
    .option('--workers <count>', 'threads of the search; no file depends on it (default: one per core)')
    .option('--json', 'print the metrics, and nothing else, as JSON')
    .action(async (file: string | undefined, flags: PlaceFlags) => finish(await place(io, file, flags)));

  command('pattern', "Prints a published rule's placement as a floorplan, to compare with.")
    .argument('<NAME>', publishedRules.map((rule) => `${rule.name}: ${rule.help}`).join('; '))
    .requiredOption('--bits <count>', 'number of bits: even, from 4')
    .option('--pitch <X,Y>', 'pitch in micrometres (default: 1,1)')
    .option('--out <file>', 'write it to this file')
    .action(async (name: string, flags: PatternFlags) => finish(await pattern(io, name, flags)));

  command('compare', 'Sets floorplans of one array side by side and says which is less sensitive, and why.')
    .argument('<FLOORPLAN...>', 'floorplan files; core, capacitors and cells are all that they need')
    .option('--pitch <own or X,Y>', "pitch for all in micrometres, or each on its own (default: the first drawn one's)")
    .option('--gradient <file>', 'measured map, CSV with the header x_um,y_um,ppm about the centre of the core')
    .option('--correlation-length <um>', 'of random mismatch (default: 0.9 at a distance of one pitch)')
    .option('--json', 'print the comparison, and nothing else, as JSON')
    .option('--csv', 'print the figures, and nothing else, as CSV')
    .action(async (files: readonly string[], flags: CompareFlags) => finish(await compareFiles(io, files, flags)));

  command('check', 'Checks a drawing from its polygons alone; given a floorplan alone, draws it first.')
    .argument('<FILE>', 'floorplan or polygons file')
    .argument('[POLYGONS]', "polygons file that is meant to be this floorplan's drawing")
    .option('--json', 'print the findings, and nothing else, as JSON')
    .action(async (file: string, polygons: string | undefined, flags: CheckFlags) =>
      finish(await check(io, file, polygons, flags)),
    );

  command('export', 'Draws a floorplan as it is and writes the drawing in other formats.')
    .argument('<FLOORPLAN>', 'floorplan file')
    .requiredOption('--to <formats>', `one or more of ${formats.join(', ')}, with commas between`)
    .option('--out <folder>', "where the files go (default: a folder of the array's name)")
    .option('--layers <file>', "layer map: stream numbers of one's own in the stream file and the polygon list")
    .option('--pins <file>', "pin names of one's own in the stream file, the netlists, the abstract and the picture")
    .option('--flat', 'stream file: everything in one structure')
    .option('--stub-cell', "stream file: a placeholder for the named cell of one's own library")
    .option('--devices <units|merged>', '.lvs.cir: one device a unit, or one a capacitor (default: units)')
    .option('--dummies <include|omit>', 'netlists: with dummies or without (default: include)')
    .option(
      '--date <YYYY-MM-DD>',
      'date in the stream file (default: a fixed one, so that equal drawings are equal files)',
    )
    .action(async (file: string, flags: ExportFlags) => finish(await exportFiles(io, file, flags)));

  const sizing = command(
    'size',
    'Tells how large the unit of a converter has to be for noise, mismatch and the technology, and writes the array file.',
  ).argument('[CONVERTER]', 'converter file');
  tableFlags(sizing, converterOptions);
  sizing
    .option('--ratio <units>', "sides of a plate that is no whole number of units, with the unit's perimeter to area")
    .option('--undercut <um>', 'with --ratio: what etching takes off each edge')
    .option('--explain', 'every formula with its numbers and its source')
    .option('--out <file>', 'write the array file')
    .option('--json', 'print the figures, and nothing else, as JSON')
    .action(async (file: string | undefined, flags: SizeFlags) => finish(await size(io, file, flags)));

  command('schema', 'Prints the JSON Schema of a file format; without a name, the names.')
    .argument('[NAME]', `one of ${schemaNames.join(', ')}`)
    .action(async (name: string | undefined) => finish(await printSchema(io, name)));

  command('technology', 'Prints a shipped technology template; without a name, what there is.')
    .argument('[NAME]', 'name of a template')
    .action(async (name: string | undefined) => finish(await printTechnology(io, name)));
  for (const each of program.commands) {
    each.option('--debug', 'after a defect of the program, show its place in the code');
  }
  return program;
}

const longNames = (command: Command): string => command.options.flatMap(({ long }) => long ?? []).join(', ');

function refuseWhatComesLater(argv: readonly string[], program: Command): void {
  const name = argv.find((word) => !word.startsWith('-')) ?? '';
  if (laterCommands.includes(name)) {
    const existing = program.commands.map((command) => command.name()).join(', ');
    throw new UsageError([`${name}: found a command that is not available yet; wanted one of ${existing}`]);
  }
  const later = Object.hasOwn(laterOptions, name) ? (laterOptions[name] ?? []) : [];
  const command = program.commands.find((candidate) => candidate.name() === name);
  const lines = argv
    .map((word) => word.replace(/=.*/s, ''))
    .filter((word) => later.includes(word))
    .map(
      (word) =>
        `${name} ${word}: found an option that is not available yet; wanted one of ${command === undefined ? '' : longNames(command)}`,
    );
  if (lines.length > 0) throw new UsageError(lines);
}

/** commander's report in our own form: what was found, what was wanted. */
function inOurWords(error: CommanderError, program: Command, name: string): string {
  const subject = /'([^']*)'/.exec(error.message)?.[1] ?? '';
  const command = program.commands.find((candidate) => candidate.name() === name);
  const commands = program.commands.map((candidate) => candidate.name()).join(', ');
  const where = command === undefined ? 'steelyard' : name;
  switch (error.code) {
    case 'commander.help':
      return `${where}: found no command; wanted one of ${commands} (steelyard --help)`;
    case 'commander.unknownCommand':
      return `${where}: found the command ${JSON.stringify(subject)}; wanted one of ${commands}`;
    case 'commander.unknownOption':
      return `${where} ${subject}: found an unknown option; wanted one of ${longNames(command ?? program)}`;
    case 'commander.optionMissingArgument':
      return `${where} ${subject}: found no value; wanted one`;
    case 'commander.missingMandatoryOptionValue':
      return `${where}: found no ${subject.split(' ')[0]}; wanted ${subject}`;
    case 'commander.missingArgument':
      return `${where}: found no ${subject}; wanted: steelyard ${name} ${command?.usage() ?? ''}`;
    case 'commander.excessArguments':
      return `${where}: found too many arguments; wanted: steelyard ${name} ${command?.usage() ?? ''}`;
    default:
      return `${where}: ${error.message}`;
  }
}

/**
 * Runs one command.
 * @returns its exit code
 * @throws UsageError for a command line that is none, and whatever the command throws
 */
export async function runCommand(argv: readonly string[], io: Io, version: string): Promise<number> {
  let code: number = exit.done;
  let help = '';
  const program = build(io, version, (result) => {
    code = result;
  });
  for (const command of [program, ...program.commands]) {
    command.exitOverride().configureOutput({
      writeOut: (text) => {
        help += text;
      },
      writeErr: () => undefined,
      outputError: () => undefined,
      getOutHelpWidth: () => io.columns,
    });
  }
  refuseWhatComesLater(argv, program);
  try {
    await program.parseAsync(argv, { from: 'user' });
  } catch (error) {
    if (!(error instanceof CommanderError)) throw error;
    if (error.exitCode !== 0) throw new UsageError([inOurWords(error, program, argv[0] ?? '')]);
  }
  if (help !== '') await io.stdout(help);
  return code;
}
