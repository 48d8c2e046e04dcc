// Entry of the WebAssembly module. Memory is laid out by the caller from heapBase() on; nothing is allocated here.
export { gemm } from './gemm.asm';
export { hermitianTimes, hermitianValuesOfMany, reduceHermitian } from './hermitian.asm';
export { qlSteps, qlValues } from './ql.asm';
export { eigenvaluesOfMany, reduceTriangle } from './reduce.asm';
export { addRows, rowDots, triangleRankTwo, triangleTimes } from './rows.asm';

/** First number the caller may use. */
export function heapBase(): i32 {
  return <i32>((__heap_base + 15) >> 4 << 1);
}
