import { type Command, Option } from 'commander';
import { parseVariant } from '../../core/encode';
import { CIRCUIT_PARTS, type CircuitPart } from '../../core/plan';
import { costing, type Flags, inputFiles, textOf } from './flags';
import { reserveFile } from './output';
import type { Request } from './request';
import { usageError } from './values';

/** One variant's circuit: written as OpenQASM 3, or counted. */
export function addCircuit(command: Command, accept: (request: Request, flags: Flags) => void): void {
  command
    .description("one variant's circuit as OpenQASM 3, or its gates counted one by one")
    .argument('<files...>', 'a folder, a recipe, or files')
    .requiredOption('--target <energy>', 'wanted accuracy with its unit, such as 5cm-1 or 1mEh')
    .requiredOption('--variant <name>', 'the variant')
    .addOption(
      new Option('--part <name>', 'what of the walk to write')
        .choices([...CIRCUIT_PARTS])
        .default('walk-step'),
    )
    .option('--out <file>', 'where to write the circuit')
    .option('--count-only', 'count one walk step instead of writing it')
    .action((files: string[], flags: Flags) => accept(circuitRequest(files, flags), flags));
}

function circuitRequest(files: readonly string[], flags: Flags): Request {
  const out = textOf(flags.out);
  const countOnly = flags.countOnly === true;
  if (countOnly === (out !== null)) {
    throw usageError(
      'spinwright circuit',
      countOnly ? 'both --count-only and --out' : 'neither --out nor --count-only',
      'one of the two',
      'Write e.g. --out walk.qasm.',
    );
  }
  const part = String(flags.part) as CircuitPart;
  if (countOnly && part !== 'walk-step') {
    throw usageError('--part', part, 'walk-step, which is what --count-only counts', 'Leave --part out.');
  }
  return {
    command: 'circuit',
    ...inputFiles(files, flags),
    circuit: { ...costing(flags), variant: parseVariant(String(flags.variant)) },
    part,
    out: out === null ? null : reserveFile(out),
  };
}
