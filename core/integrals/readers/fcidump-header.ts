import { InputError } from '../../job';
import { MAX_ARRAY_BYTES } from './limits';
import { excerpt, type Namelist } from './namelist';

/** What the namelist of an FCIDUMP says. `orbitals` counts spinors in a spinor file. */
export interface FcidumpHeader {
  readonly orbitals: number;
  readonly electrons: number | null;
  readonly ms2: number;
  readonly relativistic: boolean;
  /** `file:line` of a key, for messages. */
  at(key: string): string;
  readonly notes: string[];
}

const KNOWN = new Set(['NORB', 'NELEC', 'MS2', 'ORBSYM', 'ISYM', 'UHF', 'IUHF', 'TREL']);
/** Arrays up to this size are built for any file; larger ones only where the file is large enough as well. */
const UNQUESTIONED_BYTES = 2 ** 28;
/** A file in which one listed entry in a hundred is non-zero is still larger than its arrays over this. */
const SPARSEST = 500;

/** @throws InputError for values that are missing, malformed or contradict each other. */
export function readHeader(path: string, keys: Namelist): FcidumpHeader {
  const at = (key: string): string => `${path}:${keys.get(key)?.line ?? 1}`;
  const refuse = (code: string, key: string, found: string, expected: string, mend: string): InputError =>
    new InputError({ code, where: at(key), found, expected, mend });

  const integer = (key: string): number | null => {
    const values = keys.get(key)?.values;
    if (values === undefined) return null;
    if (values.length === 1 && /^[+-]?\d{1,9}$/.test(values[0])) return Number(values[0]);
    throw refuse(
      'bad-header',
      key,
      `${key}=${excerpt(values.join(' '))}`,
      'one whole number',
      `Correct ${key}.`,
    );
  };
  const flag = (key: string): boolean => /^(\.?t(rue)?\.?|[1-9]\d*)$/i.test(keys.get(key)?.values[0] ?? '');

  const orbitals = integer('NORB');
  if (orbitals === null) {
    throw refuse('bad-header', 'NORB', 'no NORB', 'NORB, the number of orbitals', 'Add NORB to the header.');
  }
  if (flag('UHF') || flag('IUHF')) {
    throw refuse(
      'unrestricted',
      keys.has('UHF') ? 'UHF' : 'IUHF',
      'UHF=.TRUE., separate orbitals for each spin',
      'one set of spatial orbitals (UHF=.FALSE.) or a complex spinor file',
      'Transform the integrals to restricted or natural orbitals and write the file again.',
    );
  }
  const relativistic = flag('TREL');
  if (orbitals < 1 || orbitals > (relativistic ? 800 : 400)) {
    throw refuse(
      'bad-header',
      'NORB',
      `NORB=${orbitals}`,
      relativistic ? '2 to 800 spinors' : '1 to 400 orbitals',
      'Correct NORB, or choose an active space.',
    );
  }
  const labels = keys.get('ORBSYM')?.values;
  if (labels !== undefined && labels.length !== orbitals) {
    throw refuse(
      'orbsym-count',
      'ORBSYM',
      `${labels.length} ORBSYM labels for NORB=${orbitals}`,
      'one label for each orbital',
      'Correct NORB or ORBSYM: one of the two is wrong.',
    );
  }
  const electrons = integer('NELEC');
  const ms2 = integer('MS2') ?? 0;
  const notes: string[] = [];
  if (electrons === null)
    notes.push('The header has no NELEC: the number of electrons must come from elsewhere.');
  const other = [...keys.keys()].filter((key) => !KNOWN.has(key));
  if (other.length > 0) notes.push(`Header keys without meaning here: ${excerpt(other.join(', '))}.`);
  return { orbitals, electrons, ms2, relativistic, at, notes };
}

/** @throws InputError where the electrons do not fit the places, or MS2 does not fit the electrons. */
export function requireElectrons(header: FcidumpHeader, places: number, spinless: boolean): void {
  const { electrons, ms2 } = header;
  if (electrons === null) return;
  if (electrons < 0 || electrons > places) {
    throw new InputError({
      code: 'electron-count',
      where: header.at('NELEC'),
      found: `NELEC=${electrons} for NORB=${header.orbitals}`,
      expected: `0 to ${places} electrons`,
      mend: 'Correct NELEC or NORB.',
    });
  }
  const open = Math.abs(ms2);
  if (!spinless && ((electrons - open) % 2 !== 0 || open > Math.min(electrons, places - electrons))) {
    throw new InputError({
      code: 'spin-count',
      where: header.at('MS2'),
      found: `MS2=${ms2} for NELEC=${electrons}, NORB=${header.orbitals}`,
      expected:
        'MS2, the number of unpaired electrons: even for an even NELEC, odd for an odd one, and no larger than the orbitals allow',
      mend: 'Correct MS2 or NELEC.',
    });
  }
}

/** @throws InputError `implausible-size` before anything is allocated that the file cannot fill. */
export function requirePlausible(header: FcidumpHeader, bytes: number, fileBytes: number): void {
  if (bytes <= UNQUESTIONED_BYTES || (bytes <= MAX_ARRAY_BYTES && bytes <= fileBytes * SPARSEST)) return;
  throw new InputError({
    code: 'implausible-size',
    where: header.at('NORB'),
    found: `NORB=${header.orbitals}, which takes ${Math.ceil(bytes / 2 ** 20)} MiB, in a file of ${fileBytes} bytes`,
    expected: `at most ${Math.floor(Math.max(UNQUESTIONED_BYTES, Math.min(MAX_ARRAY_BYTES, fileBytes * SPARSEST)) / 2 ** 20)} MiB of integrals`,
    mend: 'Correct NORB, or choose a smaller active space.',
  });
}
