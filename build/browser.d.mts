export const COMMANDS: readonly string[];
export function findBrowser(options?: {
  env?: Record<string, string | undefined>;
  platform?: string;
}): string | null;
export const NO_BROWSER: string;
export function sandboxFlags(uid?: number): string[];
