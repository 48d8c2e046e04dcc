export function chooseShell(situation: {
  platform: string;
  env: Record<string, string | undefined>;
  desktopAsked: boolean;
  electron: string | null;
  browser: string | null;
}): { shell: 'desktop' | 'browser' | 'terminal'; why: string };
