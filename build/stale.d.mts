export function fingerprint(paths: string[], skip?: string[]): string;
export function isStale(stamp: string, print: string): boolean;
export function writeStamp(stamp: string, print: string): void;
