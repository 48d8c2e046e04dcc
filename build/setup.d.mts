export type Bundle = 'node' | 'preload' | 'renderer';
export function ensureDependencies(): Promise<void>;
export function ensureKernels(): Promise<void>;
export function ensureBuilt(names?: Bundle[]): Promise<void>;
export function setUp(names?: Bundle[]): Promise<void>;
