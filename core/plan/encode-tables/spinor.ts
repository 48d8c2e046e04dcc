import { encodedSpinorProgram, roundedSpinorRow, type SpinorTables, spinorTables } from '../../circuit';
import { SPINOR_KINDS, type SpinorItem, type SpinorRow } from '../../encode';
import { realisedSpinorRounding, windowOfSpinorProgram } from '../../verify';
import { type ArrayLayout, byRow, type Numbers, type Pieces, sumOf, whole } from './arrays';
import { COMMON_CONVENTIONS } from './conventions';
import type { StoredTables, TablesForm } from './form';
import {
  readSquares,
  SQUARES_ARRAYS,
  SQUARES_CONVENTIONS,
  type StoredItem,
  squaresData,
  weightOf,
} from './squares';

const ARRAYS: readonly ArrayLayout[] = [
  ...SQUARES_ARRAYS,
  { name: 'item_kind', type: '|u1', shape: ['items'], meaning: 'rows of the item: 0 real, 1 axial, 2 full' },
  { name: 'item_axis', type: '|u1', shape: ['items'], meaning: 'spin axis of axial rows: 1 x, 2 y, 3 z' },
  {
    name: 'item_sign',
    type: '|i1',
    shape: ['items', 'faces'],
    meaning: 'sign of each item on each face, 0 for no face',
  },
  {
    name: 'item_odd',
    type: '|u1',
    shape: ['items', 'faces'],
    meaning: '1 where partners count with the opposite sign on that face',
  },
  {
    name: 'row_sign',
    type: '|i1',
    shape: ['rows', 'faces'],
    meaning: 'sign of each row on each face, 0 for no face',
  },
  {
    name: 'row_angles',
    type: '<u4',
    shape: ['rows', 'angles'],
    meaning: 'angle numbers t of the sizes r of the orbitals',
  },
  {
    name: 'phase_row',
    type: '<u4',
    shape: ['phaseRows'],
    meaning: 'positions of the axial and full rows, ascending',
  },
  {
    name: 'phase_angles',
    type: '<u4',
    shape: ['phaseRows', 'angles'],
    meaning: 'angle numbers beta of all orbitals but the last',
  },
  { name: 'spin_row', type: '<u4', shape: ['spinRows'], meaning: 'positions of the full rows, ascending' },
  {
    name: 'spin_angles',
    type: '<u4',
    shape: ['spinRows', 'modes'],
    meaning: 'angle numbers theta, delta of each orbital in turn',
  },
  {
    name: 'mode_phase',
    type: '<f8',
    shape: ['modes'],
    meaning: 'phase of each mode against the spinor of the files, radians',
  },
];

/** Spinor factors, of spatial orbitals and of complex spinor files. */
export const SPINOR: TablesForm<'spinor'> = {
  form: 'spinor',
  conventions: {
    ...COMMON_CONVENTIONS,
    spinOrbitals:
      'qubit = mode (Jordan-Wigner). Spatial sets: mode 2p + spin, spin 0 = up. Spinor files: mode P stands for exp(i mode_phase_P) times spinor P of the files.',
    hamiltonian:
      'H = constant + sum over the items and faces of sign * lambda * (2 B^2 - 1), in the sector of the given electrons. B = sum over the rows of probability * row sign * row. The last sizes.oneBodyItems items are lambda * B itself.',
    paired:
      'a paired item is two such terms with lambda/2 each: the second has the opposite sign, and the spins of its rows are against the axis',
    row: 'n(w) is the occupation of sum_P w_P a^dagger_P, P over modes. Without partners (sizes.partners 0) a row is 2 n(w) - 1; with them it is ((2 n(w) - 1) + (2 n(w~) - 1))/2, minus in place of plus where item_odd is 1; w~ has (conj w_down, -conj w_up) of every orbital in place of (w_up, w_down).',
    vectors:
      'r = (cos t0, sin t0 cos t1, ..., sin t0 ... sin t_(N-2)), t = (number + 1/2) * 2 pi / 2^rotation. Real rows: w = r times spin up. Axial rows: w = r_p exp(i beta_p) times the spin along the axis, which is (1, 1)/sqrt 2, (1, i)/sqrt 2, (1, 0) for x, y, z, and against it (1, -1)/sqrt 2, (1, -i)/sqrt 2, (0, 1). Full rows: (w_up, w_down) = r_p exp(i beta_p) (cos theta_p, exp(i delta_p) sin theta_p).',
    phases:
      'beta, theta, delta = number * 2 pi / 2^rotation in full rows, number * 2 pi / 2^(phase + 1) in axial rows; beta of the last orbital is 0. Numbers t of axial rows are of the coarser grid of bits.phase too: middles of its steps.',
    ...SQUARES_CONVENTIONS,
  },
  arrays: ARRAYS,
  inWindow: windowOfSpinorProgram,
  lambda: ({ items, oneBody }) =>
    sumOf(items.flatMap((item) => item.faces.map((face) => face.lambda))) +
    sumOf(oneBody.map((item) => weightOf(item.rows))),

  round(encoding, { bits: { keep, rotation } }) {
    if (!encoding.spinorProgram) return null;
    const given = encoding.spinorProgram();
    // What is merged into the main table moves numbers about in the circuit and changes none of them.
    const tables = spinorTables(given, { keep, innerKeep: keep, rotation }, []);
    const encoded = encodedSpinorProgram(given, tables);
    const squares = squaresData(
      tables.weights,
      tables.items.map(({ faces, paired, rows }) => ({ faces: faces.length, paired, rows: rows.length })),
    );
    const { orbitals, partners, spared } = given;
    const modes = 2 * orbitals;
    const phases = given.phases ?? new Float64Array(modes);
    const rows = rowData(tables, squares.addresses, squares.sizes.faces!);
    return {
      bits: { keep, innerKeep: keep, rotation, phase: tables.layout.phaseBits },
      sizes: {
        ...squares.sizes,
        ...rows.sizes,
        modes,
        oneBodyItems: given.oneBody.length,
        partners: partners ? 1 : 0,
        spared,
      },
      given,
      encoded,
      data: { ...squares.data, ...rows.data, mode_phase: whole(phases) },
      rounding: (electrons, context) => realisedSpinorRounding(given, encoded, electrons, context),
    };
  },

  async read(stored) {
    const { orbitals, constant } = stored;
    const squares = await readSquares(stored);
    const [count, faces] = [squares.items.length, stored.size('faces')];
    const oneBodyItems = stored.size('oneBodyItems');
    if (oneBodyItems > count || stored.size('modes') !== 2 * orbitals) {
      stored.refuse(
        'sizes',
        `${oneBodyItems} one-body items, ${stored.size('modes')} modes`,
        `at most ${count}, and 2 modes an orbital`,
      );
    }
    const kinds = await stored.array('item_kind', 0, SPINOR_KINDS.length);
    const axes = await stored.array('item_axis', 1, 4);
    const signs = await stored.array('item_sign', -1, 2);
    const odd = await stored.array('item_odd', 0, 2);
    const rowsOf = await rowReader(stored);
    const items = squares.items.map((item, t): SpinorItem => {
      const kind = SPINOR_KINDS[kinds[t]!]!;
      return {
        kind,
        axis: axes[t] as 1 | 2 | 3,
        paired: item.paired,
        faces: item.faces.map(({ lambda }, face) => ({
          sign: signs[t * faces + face] === -1 ? -1 : 1,
          odd: odd[t * faces + face] === 1,
          lambda,
        })),
        rows: rowsOf(item, kind),
      };
    });
    const phases = Float64Array.from(await stored.array('mode_phase'));
    return {
      orbitals,
      constant,
      partners: stored.size('partners') === 1,
      phases: phases.some((x) => x !== 0) ? phases : null,
      spared: stored.size('spared'),
      items: items.slice(0, count - oneBodyItems),
      oneBody: items.slice(count - oneBodyItems).map((item) => ({
        ...item,
        rows: item.rows.map((row) => ({
          ...row,
          faces: row.faces.map((face) => ({ ...face, weight: face.weight * item.faces[0]!.lambda })),
        })),
      })),
    };
  },
};

function rowData({ items, rows, layout }: SpinorTables, addresses: Uint32Array, faces: number) {
  const angles = layout.orbitals - 1;
  const modes = 2 * layout.orbitals;
  const kindOf = items.flatMap((item) => item.rows.map(() => item.kind));
  const positions = Uint32Array.from(addresses.keys());
  const withPhases = positions.filter((i) => kindOf[i] !== 'real');
  const withSpins = positions.filter((i) => kindOf[i] === 'full');
  const rowAt = (i: number) => rows.get(addresses[i]!)!;
  const data: Record<string, Pieces> = {
    item_kind: whole(Uint8Array.from(items, (item) => SPINOR_KINDS.indexOf(item.kind))),
    item_axis: whole(Uint8Array.from(items, (item) => item.axis)),
    item_sign: byRow('|i1', items.length, faces, (t, target, at) =>
      items[t]!.faces.forEach(({ sign }, face) => {
        target[at + face] = sign;
      }),
    ),
    item_odd: byRow('|u1', items.length, faces, (t, target, at) =>
      items[t]!.faces.forEach(({ odd }, face) => {
        target[at + face] = odd ? 1 : 0;
      }),
    ),
    row_sign: byRow('|i1', addresses.length, faces, (i, target, at) => target.set(rowAt(i).signs, at)),
    row_angles: byRow('<u4', addresses.length, angles, (i, target, at) => target.set(rowAt(i).chain, at)),
    phase_row: whole(withPhases),
    phase_angles: byRow('<u4', withPhases.length, angles, (i, target, at) =>
      target.set(rowAt(withPhases[i]!).phases, at),
    ),
    spin_row: whole(withSpins),
    spin_angles: byRow('<u4', withSpins.length, modes, (i, target, at) =>
      target.set(rowAt(withSpins[i]!).spins, at),
    ),
  };
  return { sizes: { angles, phaseRows: withPhases.length, spinRows: withSpins.length }, data };
}

/** Makes the rows of an item. */
async function rowReader(
  stored: StoredTables,
): Promise<(item: StoredItem, kind: SpinorItem['kind']) => SpinorRow[]> {
  const angles = stored.orbitals - 1;
  const [faces, modes] = [stored.size('faces'), stored.size('modes')];
  if (stored.size('angles') !== angles) {
    stored.refuse('sizes', `${stored.size('angles')} angles a row`, `${angles}, one fewer than orbitals`);
  }
  const bits = { angleBits: stored.bits('rotation') - 1, phaseBits: stored.bits('phase') };
  const limit = 2 ** bits.angleBits;
  const total = stored.size('rows');
  const signs = await stored.array('row_sign', -1, 2);
  const chains = await stored.array('row_angles', 0, limit);
  const phaseRows = placesOf(await stored.array('phase_row', 0, total));
  const phases = await stored.array('phase_angles', 0, 2 ** bits.phaseBits);
  const spinRows = placesOf(await stored.array('spin_row', 0, total));
  const spins = await stored.array('spin_angles', 0, limit);
  const numbers = (from: Numbers, place: number | undefined, width: number) =>
    place === undefined
      ? new Uint32Array(0)
      : Uint32Array.from(from.subarray(place * width, (place + 1) * width));
  return (item, kind) =>
    Array.from({ length: item.rows }, (_, j): SpinorRow => {
      const i = item.first + j;
      const [phase, spin] = [phaseRows.get(i), spinRows.get(i)];
      if ((phase === undefined) !== (kind === 'real') || (spin === undefined) !== (kind !== 'full')) {
        stored.refuse(
          'phase_row',
          `${kind} row ${i} ${phase === undefined ? 'without' : 'with'} phases, ${spin === undefined ? 'without' : 'with'} spins`,
          'phases of axial and full rows, spins of full rows',
        );
      }
      const row = {
        chain: numbers(chains, i, angles),
        phases: numbers(phases, phase, angles),
        spins: numbers(spins, spin, modes),
      };
      return {
        ...roundedSpinorRow(kind, row, bits),
        faces: item.faces.map(({ probabilities }, face) => ({
          weight: probabilities[j]!,
          sign: signs[i * faces + face] === -1 ? -1 : 1,
        })),
      };
    });
}

const placesOf = (rows: Numbers) => new Map(Array.from(rows, (row, place) => [row, place]));
