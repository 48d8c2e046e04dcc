import type { Command } from 'commander';
import { parseVariant } from '../../core/encode';
import { costing, type Flags, inputFiles } from './flags';
import { reserveFile } from './output';
import type { Request } from './request';

/** One variant's rounded tables, written into a folder. */
export function addEncode(command: Command, accept: (request: Request, flags: Flags) => void): void {
  command
    .description("one variant's tables as JSON and NumPy arrays, and what their rounding does")
    .argument('<files...>', 'a folder, a recipe, or files')
    .requiredOption('--target <energy>', 'wanted accuracy with its unit, such as 5cm-1 or 1mEh')
    .requiredOption('--variant <name>', 'the variant')
    .requiredOption('--out <dir>', 'a new or an empty folder for the tables')
    .action((files: string[], flags: Flags) =>
      accept(
        {
          command: 'encode',
          ...inputFiles(files, flags),
          encode: { ...costing(flags), variant: parseVariant(String(flags.variant)) },
          out: reserveFile(String(flags.out)),
        },
        flags,
      ),
    );
}

/** Such a folder, read back. */
export function addTables(command: Command, accept: (request: Request, flags: Flags) => void): void {
  command
    .description('reads the tables that encode wrote, and holds them against the files they were made from')
    .argument('<dir>', 'the folder of the tables')
    .argument('[files...]', 'a folder, a recipe, or files; none: the tables alone')
    .action((folder: string, files: string[], flags: Flags) =>
      accept(
        { command: 'tables', folder, against: files.length > 0 ? inputFiles(files, flags) : null },
        flags,
      ),
    );
}
