import { encodedProgram, tripletTables } from '../circuit';
import type { Encoding, TripletProgram } from '../encode';
import type { SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { denseSector, watchedStates, windowOfProgram } from '../verify';
import { fewOrbitals, STATES } from './low-states';

/** Bits at which rounding is large enough to be seen and small enough to be in proportion to 2^−bits. */
const SAMPLES = [10, 12, 14];
/** Bits of the other register meanwhile: its rounding is below anything seen. */
const MANY = 30;

/**
 * What the tables of a triplet encoding do to the levels and couplings of low states near the Fermi level, scaled to
 * zero bits: the largest of some samples. Rounding of frozen orbitals counts by their mean field.
 */
export async function measuredRounding(
  h: SpatialHamiltonian,
  encoding: Pick<Encoding, 'program'>,
  occupations: readonly number[],
  context: JobContext,
): Promise<{ readonly keep: number; readonly rotation: number }> {
  const program = encoding.program!();
  const window = fewOrbitals(h, occupations);
  const matrixOf = async (rows: TripletProgram) =>
    denseSector(await windowOfProgram(rows, window, context), context);
  const exact = await matrixOf(program);
  const states = watchedStates(exact, STATES.all);
  const scaled = async (keep: number, rotation: number) => {
    await context.checkpoint();
    const tables = tripletTables(program, { keep, innerKeep: keep, rotation });
    const rounded = await matrixOf(encodedProgram(program, tables));
    return states.change(rounded, exact).norm * 2 ** Math.min(keep, rotation);
  };
  let [keep, rotation] = [0, 0];
  for (const [i, bits] of SAMPLES.entries()) {
    context.report('rounding of the tables, seen in low states', i, SAMPLES.length);
    keep = Math.max(keep, await scaled(bits, MANY));
    rotation = Math.max(rotation, await scaled(MANY, bits));
  }
  return { keep, rotation };
}
