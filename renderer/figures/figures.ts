import {
  type EnergyUnit,
  formatChange,
  formatCount,
  formatExactCount,
  formatOneNorm,
  formatRatio,
  formatSignificant,
  fromHartree,
} from '../../core/units';

// The window adds to the shared writers of figures only what depends on its rows: units in the row head, digits
// that follow the target, one unit of time along a row.
export { formatChange, formatCount, formatExactCount, formatOneNorm, formatRatio, formatSignificant };

const HAIR = '\u200a';

/** A norm in hartree under a row head that says `Eh`: the unit stands beside the figure only where it is mEh. */
export function normUnderHead(hartree: number): string {
  return formatOneNorm(hartree).replace(/ Eh$/, '');
}

/** Decimal places of a number as written: 5 → 0, 0.05 → 2, 20 → 0. */
function places(value: number): number {
  const [mantissa, power] = String(value).split('e');
  const written = mantissa!.split('.')[1]?.length ?? 0;
  return Math.max(0, written - Number(power ?? 0));
}

/** An energy in the target's unit without the unit, two digits below the target's last place. */
export function energyUnderHead(hartree: number, target: { value: number; unit: EnergyUnit }): string {
  const value = fromHartree(hartree, target.unit);
  if (value === 0) return '0';
  const shown = places(target.value) + 2;
  const least = 10 ** -shown;
  if (Math.abs(value) < least) return `<${HAIR}${least.toFixed(shown)}`;
  if (Math.abs(value) < 1) return value.toFixed(shown);
  return formatSignificant(value, Math.floor(Math.log10(Math.abs(value))) + 1 + shown);
}

const TIMES = [
  { unit: 'days', hours: 24 },
  { unit: 'h', hours: 1 },
  { unit: 'min', hours: 1 / 60 },
  { unit: 's', hours: 1 / 3600 },
] as const;
export type TimeUnit = (typeof TIMES)[number]['unit'];

/** The unit in which a duration reads best. */
export function timeUnit(hours: number): TimeUnit {
  return TIMES.find(({ hours: size }) => hours >= 2 * size)?.unit ?? 's';
}

/** A duration in a given unit without the unit, one decimal. */
export function timeUnderHead(hours: number, unit: TimeUnit): string {
  const value = hours / TIMES.find((t) => t.unit === unit)!.hours;
  if (value >= 1e6) return formatCount(value);
  return value < 0.05
    ? `<${HAIR}0.1`
    : formatSignificant(value, Math.max(1, Math.floor(Math.log10(value)) + 2));
}

/** Units as the window writes them. */
export const UNIT_WORDS: Readonly<Record<EnergyUnit, string>> = {
  hartree: 'Eh',
  mEh: 'mEh',
  'cm-1': 'cm⁻¹',
  eV: 'eV',
  meV: 'meV',
  'kJ/mol': 'kJ/mol',
  'kcal/mol': 'kcal/mol',
  Hz: 'Hz',
};

/** `5 cm⁻¹`, with the digits the user wrote. */
export function targetWords(target: { value: number; unit: EnergyUnit }): string {
  return `${target.value} ${UNIT_WORDS[target.unit]}`;
}

/** A signed count for running text: `−2 856`, `+132`. */
export function signedCount(value: number): string {
  return value > 0 ? `+${formatCount(value)}` : formatCount(value);
}

/** Bytes for people, in decimal units. */
export function formatBytes(bytes: number): string {
  if (bytes < 1000) return `${bytes} B`;
  const units = ['kB', 'MB', 'GB'];
  const power = Math.min(3, Math.floor(Math.log10(bytes) / 3));
  return `${formatSignificant(bytes / 1000 ** power, 3)} ${units[power - 1]}`;
}
