import type { OpenedFiles } from '../shell';

async function filesBelow(entry: FileSystemEntry, prefix: string): Promise<OpenedFiles['files']> {
  if (entry.isFile) {
    const file = await new Promise<File>((resolve, reject) =>
      (entry as FileSystemFileEntry).file(resolve, reject),
    );
    return [{ path: `${prefix}${entry.name}`, blob: file }];
  }
  const reader = (entry as FileSystemDirectoryEntry).createReader();
  const found: { path: string; blob: Blob }[] = [];
  // A reader hands out at most a hundred entries a call and an empty list at the end.
  for (;;) {
    const batch = await new Promise<FileSystemEntry[]>((resolve, reject) =>
      reader.readEntries(resolve, reject),
    );
    if (batch.length === 0) return found;
    for (const each of batch) {
      found.push(...(await filesBelow(each, each.isDirectory ? `${prefix}${each.name}/` : prefix)));
    }
  }
}

/** Files and folders of a drop; a single dropped folder is the data set, its name no part of the paths. */
export async function droppedFiles(transfer: DataTransfer): Promise<OpenedFiles> {
  // The list is emptied once the event handler returns, so everything is taken before anything is awaited.
  const entries = [...transfer.items].map((item) => item.webkitGetAsEntry()).filter((e) => e !== null);
  const loose = [...transfer.files];
  if (entries.length === 0) {
    const files = loose.map((file) => ({ path: file.name, blob: file }));
    return { name: loose[0]?.name ?? '', files, chosenOneByOne: true };
  }
  const alone = entries.length === 1;
  const groups = await Promise.all(
    entries.map((entry) => filesBelow(entry, entry.isDirectory && !alone ? `${entry.name}/` : '')),
  );
  const folder = alone && entries[0]!.isDirectory;
  return { name: entries[0]!.name, files: groups.flat(), chosenOneByOne: !folder };
}
