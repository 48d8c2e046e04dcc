import { type Command, Option } from 'commander';
import { WHATIF_METHODS, type WhatIfMethod } from '../../core/estimate';
import { toHartree } from '../../core/units';
import type { Flags } from './flags';
import type { Request, WhatIfRequest } from './request';
import { parseCount, parseNumber, parseTarget } from './values';

/** Up to 2⁴⁰ factors, rows or coefficients: far above any published table. */
const MOST = 2 ** 40;

/** Sizes that some methods need, by the name of their flag. */
const SIZES = ['factors', 'rows', 'coefficients', 'rank'] as const;

/** Costs from published sizes, no integrals. */
export function addWhatIf(command: Command, accept: (request: Request, flags: Flags) => void): void {
  command
    .description('costs from published numbers alone, no integrals')
    .addOption(
      new Option('--method <name>', 'the block encoding').choices([...WHATIF_METHODS]).makeOptionMandatory(),
    )
    .requiredOption('--spin-orbitals <n>', 'spin orbitals, two an orbital')
    .requiredOption('--lambda <hartree>', 'one-norm of the block encoding')
    .requiredOption('--target <energy>', 'wanted accuracy with its unit, all of it for the walk')
    .option('--factors <n>', 'outer factors (double- and single-factorised)')
    .option('--rows <n>', 'ranks of all factors together (double-factorised)')
    .option('--coefficients <n>', 'stored coefficients (sparse)')
    .option('--rank <n>', 'rank (hypercontracted)')
    .option('--keep-bits <n>', 'bits of the keep values', '10')
    .option('--rotation-bits <n>', 'bits of the angles', '16')
    .option('--lookup-block <k>', 'block of the largest table, a power of two')
    .option('--qubits-max <n>', 'most logical qubits look-ups may use')
    .action((flags: Flags) => accept(whatIfRequest(flags), flags));
}

function whatIfRequest(flags: Flags): WhatIfRequest {
  const count = (flag: string, key: string, least: number, most: number): number | undefined =>
    typeof flags[key] === 'string' ? parseCount(flag, flags[key], least, most) : undefined;
  const { value, unit } = parseTarget(String(flags.target));
  const lambda = parseNumber(
    '--lambda',
    String(flags.lambda),
    'a number of hartree above 0',
    '294.8',
    (x) => x > 0,
  );
  const sizes = SIZES.map((name) => [name, count(`--${name}`, name, 1, MOST)] as const);
  const optional = [
    ...sizes,
    ['lookupBlock', count('--lookup-block', 'lookupBlock', 1, MOST)] as const,
    ['qubitsMax', count('--qubits-max', 'qubitsMax', 1, MOST)] as const,
  ].filter(([, size]) => size !== undefined);
  return {
    command: 'whatif',
    options: {
      method: flags.method as WhatIfMethod,
      spinOrbitals: count('--spin-orbitals', 'spinOrbitals', 2, 4096)!,
      lambda,
      target: toHartree(value, unit),
      keepBits: count('--keep-bits', 'keepBits', 1, 60)!,
      rotationBits: count('--rotation-bits', 'rotationBits', 3, 60)!,
      ...Object.fromEntries(optional),
    },
  };
}
