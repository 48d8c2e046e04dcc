import { InputError, type JobContext } from '../../job';
import { pairsTriangleLength } from '../integral-set';
import type { SpinFreeContents } from '../raw';
import type { ByteSource, Hdf5File, ReadPlatform } from '../source';
import { noSuchDataset, openHdf5, readNumbers } from './hdf5';
import { countElements, requireFinite } from './limits';
import { Disagreement, SlotSet } from './listed';

/** Mirror elements of h may differ by this much, relative to the largest. */
const SYMMETRY_TOLERANCE = 1e-8;

/**
 * Reads the molecular-orbital integrals of a TREXIO file with the HDF5 back end (TREXIO documentation, groups
 * `mo`, `mo_1e_int`, `mo_2e_int`, `nucleus`, `electron`; Posenitskiy et al., J. Chem. Phys. 158, 174801 (2023)).
 * Its two-electron integrals are ⟨pq|rs⟩, physicists' notation, sparse; they are returned as (pr|qs). Atomic units.
 * @throws InputError naming `file:/dataset`.
 */
export async function readTrexio(
  source: ByteSource,
  platform: ReadPlatform,
  context: JobContext,
): Promise<SpinFreeContents> {
  const file = await openHdf5(source, platform);
  try {
    return await new TrexioReader(file, source.path, context).read();
  } finally {
    file.close();
  }
}

/** Whether an HDF5 file is laid out as TREXIO lays it out. */
export const isTrexio = (file: Hdf5File): boolean => file.attribute('mo_num', '/mo') !== undefined;

class TrexioReader {
  private readonly notes: string[] = [];

  constructor(
    private readonly file: Hdf5File,
    private readonly origin: string,
    private readonly context: JobContext,
  ) {}

  async read(): Promise<SpinFreeContents> {
    const orbitals = this.orbitals();
    await this.refuseOtherOrbitals();
    const { electrons, ms2 } = this.electrons(orbitals);
    return {
      kind: 'spin-free',
      origin: this.origin,
      orbitals,
      electrons,
      ms2,
      constant: await this.repulsion(),
      oneElectron: await this.oneElectron(orbitals),
      twoElectron: await this.twoElectron(orbitals),
      notes: this.notes,
    };
  }

  private orbitals(): number {
    const orbitals = this.file.attribute('mo_num', '/mo');
    if (orbitals !== undefined && Number.isInteger(orbitals) && orbitals >= 1 && orbitals <= 400) {
      countElements(`${this.origin}:/mo`, [pairsTriangleLength(orbitals)], 8);
      return orbitals;
    }
    const [found, mend] =
      orbitals === undefined
        ? ['no number of orbitals (mo_num)', 'Is this a TREXIO file?']
        : [`mo_num = ${orbitals}`, 'Choose an active space, or write the file again.'];
    throw this.problem('bad-header', '/mo', found, '1 to 400 molecular orbitals', mend);
  }

  private async refuseOtherOrbitals(): Promise<void> {
    const complex = this.file.datasets().find((path) => /\/mo_\w+_im(_|$)/.test(path));
    if (complex !== undefined) {
      const mend = 'Write integrals over real orbitals, or a complex spinor FCIDUMP.';
      throw this.problem('complex-orbitals', complex, 'complex orbitals', 'real orbitals', mend);
    }
    const spins = this.file.dataset('/mo/mo_spin');
    if (spins === undefined) return;
    const values = await spins.readAll();
    if (values.every((spin) => spin === values[0])) return;
    const mend = 'Write integrals over one set of spatial orbitals.';
    throw this.problem('unrestricted', spins.path, 'orbitals of both spins', 'spatial orbitals', mend);
  }

  private electrons(orbitals: number): { electrons: number | null; ms2: number } {
    const up = this.file.attribute('electron_up_num', '/electron');
    const down = this.file.attribute('electron_dn_num', '/electron');
    const all = this.file.attribute('electron_num', '/electron');
    if (up !== undefined && down !== undefined) {
      if (Math.min(up, down) >= 0 && Math.max(up, down) <= orbitals && (all ?? up + down) === up + down) {
        return { electrons: up + down, ms2: up - down };
      }
      const found = `${up} + ${down} electrons${all === undefined ? '' : ` of ${all}`} in ${orbitals} orbitals`;
      const mend = 'Correct the numbers of electrons.';
      throw this.problem(
        'electron-count',
        '/electron',
        found,
        `at most ${orbitals} of each spin, and their sum`,
        mend,
      );
    }
    this.notes.push('The file does not say how many electrons have which spin.');
    return { electrons: all ?? null, ms2: (all ?? 0) % 2 };
  }

  private async repulsion(): Promise<number> {
    const stored = this.file.attribute('nucleus_repulsion', '/nucleus');
    if (stored !== undefined) {
      if (Number.isFinite(stored)) return stored;
      throw this.problem(
        'not-finite',
        '/nucleus',
        `repulsion ${stored}`,
        'a finite number',
        'Write it again.',
      );
    }
    const charges = await this.numbers('/nucleus/nucleus_charge');
    const places = await this.numbers('/nucleus/nucleus_coord');
    if (places.length !== 3 * charges.length) {
      const found = `${places.length} coordinates for ${charges.length} nuclei`;
      throw this.problem(
        'wrong-shape',
        '/nucleus/nucleus_coord',
        found,
        'three each',
        'Write the file again.',
      );
    }
    let energy = 0;
    for (let a = 0; a < charges.length; a++) {
      for (let b = 0; b < a; b++) {
        const [x, y, z] = [0, 1, 2].map((k) => places[3 * a + k] - places[3 * b + k]);
        energy += (charges[a] * charges[b]) / Math.hypot(x, y, z);
      }
    }
    this.notes.push(`Nuclear repulsion computed from charges and coordinates: ${energy} hartree.`);
    if (Number.isFinite(energy)) return energy;
    const mend = 'Correct the coordinates or store nucleus/repulsion.';
    throw this.problem(
      'not-finite',
      '/nucleus/nucleus_coord',
      'nuclei at the same place',
      'a geometry',
      mend,
    );
  }

  private async oneElectron(n: number): Promise<Float64Array> {
    const name = (part: string) => `/mo_1e_int/mo_1e_int_${part}`;
    const whole = this.file.dataset(name('core_hamiltonian')) !== undefined;
    const parts = whole ? ['core_hamiltonian'] : ['kinetic', 'potential_n_e'];
    if (!whole) {
      if (this.file.dataset(name('ecp')) !== undefined) parts.push('ecp');
      this.notes.push(`One-electron integrals summed from ${parts.join(' and ')}.`);
    }
    const sum = new Float64Array(n * n);
    for (const part of parts) {
      const values = await this.numbers(name(part), n * n);
      for (let i = 0; i < sum.length; i++) sum[i] += values[i];
    }
    const largest = sum.reduce((max, value) => Math.max(max, Math.abs(value)), 0);
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < p; q++) {
        const difference = Math.abs(sum[p * n + q] - sum[q * n + p]);
        if (difference > SYMMETRY_TOLERANCE * largest) {
          const found = `elements (${p},${q}) and (${q},${p}) that differ by ${difference.toPrecision(3)}`;
          const mend = 'Write the file again; the orbitals may be complex, which is not handled here.';
          throw this.problem('asymmetric', name(parts[0]), found, 'a symmetric matrix', mend);
        }
        sum[q * n + p] = sum[p * n + q];
      }
    }
    return sum;
  }

  private async twoElectron(n: number): Promise<Float64Array> {
    const path = '/mo_2e_int/mo_2e_int_eri_indices';
    const indices = await this.numbers(path);
    const values = await this.numbers('/mo_2e_int/mo_2e_int_eri_values');
    if (indices.length !== 4 * values.length) {
      const found = `${indices.length} indices for ${values.length} values`;
      throw this.problem('wrong-shape', path, found, 'four indices a value', 'Write the file again.');
    }
    const out = new Float64Array(pairsTriangleLength(n));
    const listed = new SlotSet(out.length);
    const clash = new Disagreement();
    let largest = 0;
    for (let e = 0; e < values.length; e++) {
      if (e % 65536 === 0) await this.context.checkpoint();
      for (let k = 4 * e; k < 4 * e + 4; k++) {
        if (indices[k] >= 0 && indices[k] < n && Number.isInteger(indices[k])) continue;
        const found = `index ${indices[k]} in entry ${e}`;
        const mend = 'Indices count from 0; write the file again.';
        throw this.problem('index-out-of-range', path, found, `0 to ${n - 1}`, mend);
      }
      // ⟨pq|rs⟩ = (pr|qs)
      const slot = triangle(
        triangle(indices[4 * e], indices[4 * e + 2]),
        triangle(indices[4 * e + 1], indices[4 * e + 3]),
      );
      largest = Math.max(largest, Math.abs(values[e]));
      if (listed.has(slot)) clash.note(slot, Math.abs(out[slot] - values[e]), e);
      else {
        listed.add(slot);
        out[slot] = values[e];
      }
    }
    const worst = clash.beyond(largest);
    if (worst === null) return out;
    const shown = indices.subarray(4 * worst.line, 4 * worst.line + 4).join(' ');
    const found = `entry ${worst.line} (${shown}), which differs by ${worst.difference.toPrecision(3)} from an earlier one`;
    const mend = 'Remove one of the two, or write the file again.';
    throw this.problem('duplicate-entry', path, found, 'equal values for equal integrals', mend);
  }

  private async numbers(path: string, count?: number): Promise<Float64Array> {
    const dataset = this.file.dataset(path);
    if (dataset === undefined) {
      const mend = 'Write the file again with all its molecular-orbital integrals and nuclei.';
      throw noSuchDataset(this.file, this.origin, path, mend);
    }
    const total = dataset.shape.reduce((product, extent) => product * extent, 1);
    if (dataset.kind === 'complex' || (count !== undefined && total !== count)) {
      const found = dataset.kind === 'complex' ? 'complex numbers' : `shape (${dataset.shape.join(', ')})`;
      const expected = count === undefined ? 'real numbers' : `${count} real numbers`;
      throw this.problem('wrong-shape', path, found, expected, 'Write the file again.');
    }
    const data = await readNumbers(dataset, this.origin, this.context);
    requireFinite(`${this.origin}:${path}`, data, dataset.shape, false);
    return data;
  }

  private problem(code: string, path: string, found: string, expected: string, mend: string): InputError {
    return new InputError({ code, where: `${this.origin}:${path}`, found, expected, mend });
  }
}

const triangle = (p: number, q: number): number => (p >= q ? (p * (p + 1)) / 2 + q : (q * (q + 1)) / 2 + p);
