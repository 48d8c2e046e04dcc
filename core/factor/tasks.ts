import { eigenTask } from './eigenvectors';
import { mixingTask } from './mixing/squares';
import { tripleMixingTask } from './mixing/triples';
import { modeSpectraTask } from './shifts/mode-spectra';
import { spectraTask } from './spectra';
import { hermitianSpectraTask } from './spinor';
import { svdTask } from './triples';

/** Tasks that workers must know by name to run factorisations in parallel. */
export const factorTasks = [
  eigenTask,
  spectraTask,
  svdTask,
  hermitianSpectraTask,
  mixingTask,
  tripleMixingTask,
  modeSpectraTask,
] as const;
