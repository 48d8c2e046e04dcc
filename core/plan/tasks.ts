import { encodeTasks } from '../encode';
import { factorTasks } from '../factor';
import { rotatePairsTask } from '../hamiltonian';
import type { Task } from '../job';

const TASKS: ReadonlyMap<string, Task<unknown, unknown>> = new Map(
  [rotatePairsTask, ...factorTasks, ...encodeTasks].map((task) => [
    task.name,
    task as Task<unknown, unknown>,
  ]),
);

/** Names of all tasks that workers can run. */
export const TASK_NAMES: readonly string[] = [...TASKS.keys()];

/**
 * The task of that name. Every task that a job hands to `context.map` must be in the table: a worker knows a
 * task by its name only.
 */
export function findTask(name: string): Task<unknown, unknown> {
  const task = TASKS.get(name);
  if (!task) throw new Error(`no task named "${name}": add it to its folder's list of tasks`);
  return task;
}
