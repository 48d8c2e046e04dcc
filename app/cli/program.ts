import { Command, CommanderError, Option } from 'commander';
import { FRAME_CHOICES, MEANINGS } from '../../core/plan';
import { version } from '../../package.json';
import { addCircuit } from './circuit-command';
import { addEncode, addTables } from './encode-command';
import {
  compareRequest,
  electronsOf,
  type Flags,
  inputFiles,
  readManner,
  selection,
  textOf,
  variantsOf,
} from './flags';
import type { Manner, Request } from './request';
import { parseCount, parseThreshold, usageError } from './values';
import { addWhatIf } from './whatif-command';

/** A call of the command line: what is asked and how to answer. */
export interface Call {
  readonly request: Request;
  readonly manner: Manner;
}

/** Help or the version was asked for, and written. */
export class HelpShown extends Error {}

/**
 * Reads the arguments after `spinwright`.
 * @param demoFolder where the demo's files are
 * @param write where help and version go
 * @throws InputError `usage` with the flag, what was found, what is allowed
 * @throws HelpShown where help or the version was printed instead
 */
export function parseCall(args: readonly string[], demoFolder: string, write: (text: string) => void): Call {
  let call: Call | null = null;
  const program = buildProgram(demoFolder, (request, flags) => {
    call = { request, manner: readManner(flags) };
  });
  for (const command of [program, ...program.commands]) {
    command.exitOverride().configureOutput({ writeOut: write, writeErr: () => {} });
  }
  try {
    program.parse([...args], { from: 'user' });
  } catch (error) {
    if (error instanceof CommanderError) throw fromCommander(error, args);
    throw error;
  }
  if (!call) throw usageError('spinwright', 'no command', 'one of the commands', 'See spinwright --help.');
  return call;
}

type Accept = (request: Request, flags: Flags) => void;

function buildProgram(demoFolder: string, accept: Accept): Command {
  const program = new Command('spinwright')
    .description('Plans fault-tolerant phase estimation of relativistic molecules from their integral files.')
    .version(version)
    .helpCommand(false)
    .addHelpText(
      'after',
      '\nPlanning estimates only. Exit status: 0 done, 1 a bug, 2 bad input, 3 failed, 4 a check failed.',
    );

  reading(program.command('inspect'))
    .description('what the files hold: terms, norms, findings')
    .argument('<files...>', 'a folder, a recipe, or files')
    .option('--electrons <n>', 'electrons in the orbitals')
    .option('--write-recipe <file>', 'write down how the files were read')
    .action((files: string[], flags: Flags) =>
      accept(
        {
          command: 'inspect',
          ...inputFiles(files, flags),
          electrons: electronsOf(flags),
          writeRecipe: textOf(flags.writeRecipe),
        },
        flags,
      ),
    );

  comparing(reading(program.command('compare')))
    .description('the variants side by side')
    .argument('<files...>', 'a folder, a recipe, or files')
    .requiredOption('--target <energy>', 'wanted accuracy with its unit, such as 5cm-1 or 1mEh')
    .action((files: string[], flags: Flags) => accept(compareRequest(files, flags), flags));

  selecting(reading(program.command('verify')))
    .description('exact against encoded spectra of a small system')
    .argument('<files...>', 'a folder, a recipe, or files')
    .option('--variants <list>', 'variants to check; * stands for every value of an axis')
    .option('--threshold <hartree>', 'what truncation may drop', '0')
    .option('--states <n>', 'eigenvalues to show', '6')
    .action((files: string[], flags: Flags) => {
      const threshold = parseThreshold(String(flags.threshold));
      if (threshold === 'auto') {
        throw usageError(
          '--threshold',
          '"auto"',
          'a number of hartree: verify has no target',
          'Write e.g. 0.',
        );
      }
      accept(
        {
          command: 'verify',
          ...inputFiles(files, flags),
          ...selection(flags),
          variants: variantsOf(flags),
          threshold,
          states: parseCount('--states', String(flags.states), 1, 10_000),
        },
        flags,
      );
    });

  addCircuit(costed(reading(program.command('circuit'))), accept);

  addEncode(costed(reading(program.command('encode'))), accept);

  addTables(reading(program.command('tables')), accept);

  addWhatIf(answering(program.command('whatif')), accept);

  comparing(answering(program.command('demo')))
    .description('the bundled demo: formaldehyde, a carbonyl chromophore')
    .option('--target <energy>', 'wanted accuracy with its unit', '5cm-1')
    .option('--out <dir>', 'copy the demo files there instead of comparing')
    .action((flags: Flags) => {
      const out = textOf(flags.out);
      if (out !== null) accept({ command: 'copy-demo', from: demoFolder, out }, flags);
      else accept(compareRequest([demoFolder], flags), flags);
    });
  return program;
}

/** Options of commands that read files. */
function reading(command: Command): Command {
  return answering(command).option('--recipe <file>', 'how to read the files');
}

/** Options of every command. */
function answering(command: Command): Command {
  return command
    .option('--json', 'one JSON document on stdout')
    .option('--quiet', 'no progress and no notes on stderr')
    .option('--seed <n>', 'seed of every random choice', '1')
    .option('--workers <n>', 'processor cores to use', '1')
    .addOption(new Option('--trace').hideHelp());
}

function selecting(command: Command): Command {
  return command
    .option('--terms <list>', 'terms to keep: all, or of sf,so1,somf,so2,so2mf,ss,scalar,ssc', 'all')
    .option('--electrons <n>', 'electrons in the orbitals')
    .option('--occupations <list>', 'reference occupations, 0 to 2 an orbital, for mean fields')
    .option('--window <orbitals>', 'keep these orbitals, such as 3-6,9; the others become a mean field')
    .option('--window-electrons <n>', 'electrons in the window; else what the occupations leave there')
    .addOption(
      new Option('--spin-frame <how>', 'spin axes of the forms over spin components, for a smaller lambda')
        .choices([...FRAME_CHOICES])
        .default('given'),
    )
    .addOption(
      new Option('--orbital-frame <how>', 'orbitals of the sparse form, for a smaller lambda')
        .choices([...FRAME_CHOICES])
        .default('given'),
    );
}

function comparing(command: Command): Command {
  return costed(command)
    .option('--variants <list>', 'variants to compare; * stands for every value of an axis')
    .option('--mixing-state <file>', 'keep the mixing of factors there, and go on from it');
}

/** Options that decide the costs of a variant. */
function costed(command: Command): Command {
  return selecting(command)
    .addOption(
      new Option('--meaning <what>', 'what the target is of').choices([...MEANINGS]).default('level'),
    )
    .option('--threshold <hartree>', 'what truncation may drop, 0 = nothing, or auto', '0')
    .option('--bits <n>', 'bits of keep values and angles, or auto', 'auto')
    .option('--factors <n>', 'factors of compressed variants: auto, 6N, or a number', 'auto')
    .option('--overlap <p>', 'squared overlap of the start state, two for a splitting', '1')
    .option('--qubits-max <n>', 'most logical qubits a run may use');
}

/** commander's own message, in our one line. */
function fromCommander(error: CommanderError, args: readonly string[]): Error {
  if (error.exitCode === 0) return new HelpShown();
  const command = args.find((arg) => !arg.startsWith('-')) ?? '';
  const help = COMMANDS.includes(command) ? `spinwright ${command} --help` : 'spinwright --help';
  const found = error.message
    .replace(/^error: /, '')
    .replace(/\.$/, '')
    .replace(/\s*\n\s*/g, ' ');
  const isMissingCommand = error.code === 'commander.help';
  return usageError(
    'spinwright',
    isMissingCommand ? 'no command' : found,
    'a command with its own options',
    `See ${help}.`,
  );
}

const COMMANDS = ['inspect', 'compare', 'verify', 'circuit', 'encode', 'tables', 'whatif', 'demo'];
