import { spinorNormsTask } from './spinor-norms';

/** Tasks that workers must know by name to run encodings in parallel. */
export const encodeTasks = [spinorNormsTask] as const;
