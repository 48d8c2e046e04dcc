export {
  ENERGY_UNITS,
  type EnergyUnit,
  FINE_STRUCTURE,
  fromHartree,
  HARTREE_IN,
  parseEnergy,
  toHartree,
} from './energy';
