import { eigenTask } from './eigenvectors';
import { mixingTask } from './mixing/objective';
import { spectraTask } from './spectra';
import { hermitianSpectraTask } from './spinor';
import { svdTask } from './triples';

/** Tasks that workers must know by name to run factorisations in parallel. */
export const factorTasks = [eigenTask, spectraTask, svdTask, hermitianSpectraTask, mixingTask] as const;
