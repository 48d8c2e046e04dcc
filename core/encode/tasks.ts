import { spinorNormsTask, tripleNormsTask } from './spinor-norms';

/** Tasks that workers must know by name to run encodings in parallel. */
export const encodeTasks = [spinorNormsTask, tripleNormsTask] as const;
