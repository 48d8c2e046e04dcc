export { type BuildOptions, buildHamiltonian, heldTerms, SELECTABLE_TERMS } from './build';
export { orderingOperator } from './contraction';
export { fromProductForm, fromStoredForm, spinorFromProductForm, spinorFromStoredForm } from './forms';
export type {
  SpatialHamiltonian,
  SpinHamiltonian,
  SpinorHamiltonian,
  TwoElectronTensor,
} from './hamiltonian';
export { hamiltonianDefect } from './hermiticity';
export { spinOrbitMeanField } from './mean-field';
export { type NormalOrdered, normalOrder } from './normal-order';
export {
  addScaled,
  chargeTrace,
  frobeniusNorm,
  hermiticityDefect,
  isSymmetricPlane,
  MUS,
  type Mu,
  planeOf,
  type Sector,
  scaled,
  type TripletOperator,
  toSpinOrbitals,
  zeroOperator,
} from './operators';
export { PAULI_ENTRIES } from './pauli';
export { rotatedSquare, rotateOrbitals, rotateSpin, squareOfTriangle, turnedSpinPlanes } from './rotate';
export { rotatePairsTask } from './rotate-pairs';
export { spinorForm } from './spinor-form';
export {
  coulombBlock,
  operatorFromVector,
  otherOrbitBlock,
  planeDimension,
  sameOrbitBlock,
  sectorDimension,
  sectorMatrix,
  spinSpinBlock,
  vectorFromOperator,
} from './super-matrix';
export {
  oppositeShift,
  type SpinorShift,
  type SymmetryShift,
  shiftedHamiltonian,
  shiftedSpinorHamiltonian,
} from './symmetry-shift';
export { tensorElement } from './tensor-element';
export { type OrbitalWindow, restrictToWindow } from './window';
