export { checkTables, type TablesCheck } from './check';
export { TABLES_FILE, type TablesDocument } from './document';
export { type EncodedTables, encodeTables } from './encode';
export type { FormProgram } from './form';
export type { StoredFrame } from './frame';
export { readFrame, readTables } from './read';
export { writeTables } from './write';
