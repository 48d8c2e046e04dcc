export {
  ENERGY_UNITS,
  type EnergyUnit,
  FINE_STRUCTURE,
  fromHartree,
  HARTREE_IN,
  parseEnergy,
  toHartree,
} from './energy';
export {
  formatChange,
  formatCount,
  formatDuration,
  formatExactCount,
  formatOneNorm,
  formatRatio,
  formatShare,
  formatSignificant,
  NOT_APPLICABLE,
} from './figures';
