import type { MenuItemConstructorOptions } from 'electron';

/** The menu. Its items send commands to the page; what they do is known there only. */
export function menuTemplate(
  platform: NodeJS.Platform,
  send: (command: string) => void,
): MenuItemConstructorOptions[] {
  const item = (label: string, command: string, accelerator?: string): MenuItemConstructorOptions => ({
    label,
    ...(accelerator ? { accelerator } : {}),
    click: () => send(command),
  });
  const stops = ['Load', 'Terms', 'Target', 'Variants', 'Ledger', 'Proof'];
  return [
    ...(platform === 'darwin' ? [{ role: 'appMenu' as const }] : []),
    {
      label: 'File',
      submenu: [
        item('Open files…', 'open-files', 'CmdOrCtrl+O'),
        item('Open folder…', 'open-folder', 'CmdOrCtrl+Shift+O'),
        item('Open demo', 'demo'),
        { type: 'separator' },
        { role: platform === 'darwin' ? 'close' : 'quit' },
      ],
    },
    { role: 'editMenu' },
    {
      label: 'Job',
      submenu: [
        // The page listens for the same keys itself, so the menu only shows them.
        { ...item('Reckon', 'reckon', 'CmdOrCtrl+Enter'), registerAccelerator: false },
        item('Stop job', 'stop-job'),
        { type: 'separator' },
        item('Copy table', 'copy-table'),
      ],
    },
    { label: 'Stops', submenu: stops.map((label, at) => item(label, `stop-${at + 1}`)) },
    { role: 'windowMenu' },
    { label: 'Help', submenu: [item('Keys', 'keys')] },
  ];
}
