import { contextBridge, ipcRenderer } from 'electron';

// Literals instead of an import: a sandboxed preload script is one file. A test compares them with ipc.ts.
contextBridge.exposeInMainWorld('desktop', {
  open: (what: string) => ipcRenderer.invoke('files:open', what),
  save: (name: string, text: string) => ipcRenderer.invoke('files:save', name, text),
  recent: () => ipcRenderer.invoke('files:recent'),
  openRecent: (id: string) => ipcRenderer.invoke('files:open-recent', id),
  onCommand(listener: (command: string) => void) {
    const hear = (_event: unknown, command: unknown) => {
      if (typeof command === 'string') listener(command);
    };
    ipcRenderer.on('window:command', hear);
    return () => ipcRenderer.off('window:command', hear);
  },
});
