export { readFcidump } from './fcidump';
export { fileSetFromMemory, memorySource } from './memory';
export { type Format, sniffFormat } from './sniff';
