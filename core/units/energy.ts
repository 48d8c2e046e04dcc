/**
 * Physical constants, all CODATA 2018 (E. Tiesinga et al., Rev. Mod. Phys. 93, 025010 (2021)). The integral
 * files this tool reads were made with that edition; the 2022 values differ in the tenth digit.
 */

/** Fine-structure constant α, dimensionless. */
export const FINE_STRUCTURE = 1 / 137.035999084;

/** Units an energy may be given in. The molar ones are per mole of molecules. */
export const ENERGY_UNITS = ['hartree', 'mEh', 'cm-1', 'eV', 'meV', 'kJ/mol', 'kcal/mol', 'Hz'] as const;
export type EnergyUnit = (typeof ENERGY_UNITS)[number];

/** One hartree in each unit. kcal is the thermochemical one, 4.184 kJ exactly. */
export const HARTREE_IN: Readonly<Record<EnergyUnit, number>> = {
  hartree: 1,
  mEh: 1e3,
  'cm-1': 219474.6313632,
  eV: 27.211386245988,
  meV: 27211.386245988,
  'kJ/mol': 2625.4996394799,
  'kcal/mol': 2625.4996394799 / 4.184,
  Hz: 6.579683920502e15,
};

/** Converts `value` in `unit` to hartree. */
export function toHartree(value: number, unit: EnergyUnit): number {
  return value / HARTREE_IN[unit];
}

/** Converts `value` in hartree to `unit`. */
export function fromHartree(value: number, unit: EnergyUnit): number {
  return value * HARTREE_IN[unit];
}

const SPELLINGS: Readonly<Record<string, EnergyUnit>> = {
  hartree: 'hartree',
  eh: 'hartree',
  ha: 'hartree',
  meh: 'mEh',
  mha: 'mEh',
  'cm-1': 'cm-1',
  'cm^-1': 'cm-1',
  'cm⁻¹': 'cm-1',
  'cm−1': 'cm-1',
  ev: 'eV',
  mev: 'meV',
  'kj/mol': 'kJ/mol',
  'kcal/mol': 'kcal/mol',
  hz: 'Hz',
};

/**
 * Reads an energy with its unit, such as `5cm-1`, `1 mEh` or `0,05 meV` (a comma is a decimal sign).
 *
 * @returns the value in the unit as written, or null where the text is no energy with a known unit.
 */
export function parseEnergy(text: string): { value: number; unit: EnergyUnit } | null {
  const match = /^\s*([+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+)(?:[eEdD][+-]?\d+)?)\s*([A-Za-z][^\s]*)\s*$/.exec(text);
  if (!match) return null;
  const value = Number(match[1]!.replace(',', '.').replace(/[dD]/, 'e'));
  const unit = SPELLINGS[match[2]!.toLowerCase()];
  return unit !== undefined && Number.isFinite(value) ? { value, unit } : null;
}
