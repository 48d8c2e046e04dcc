export { type Finding, InputError, type Problem, plainLine } from './input-error';
export { Cancelled, inlineContext, type JobContext, type Task } from './job';
