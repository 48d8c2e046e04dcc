import { createHash } from 'node:crypto';

export interface RecentEntry {
  readonly id: string;
  readonly name: string;
  readonly paths: readonly string[];
}

/** Where the list is kept between two starts. */
export interface RecentStore {
  read(): Promise<string>;
  write(text: string): Promise<void>;
}

const MOST = 10;

/** Files opened last, newest first. A list that cannot be read is an empty one: it is only a convenience. */
export class Recent {
  readonly #store: RecentStore;

  constructor(store: RecentStore) {
    this.#store = store;
  }

  async list(): Promise<readonly RecentEntry[]> {
    try {
      const entries: unknown = JSON.parse(await this.#store.read());
      return Array.isArray(entries) ? entries.filter(isEntry) : [];
    } catch {
      return [];
    }
  }

  async add({ name, paths }: { name: string; paths: readonly string[] }): Promise<void> {
    const id = createHash('sha256').update(paths.join('\0')).digest('hex').slice(0, 16);
    const others = (await this.list()).filter((entry) => entry.id !== id);
    await this.#store.write(JSON.stringify([{ id, name, paths }, ...others].slice(0, MOST)));
  }
}

function isEntry(value: unknown): value is RecentEntry {
  if (typeof value !== 'object' || value === null) return false;
  const { id, name, paths } = value as Record<string, unknown>;
  return (
    typeof id === 'string' &&
    typeof name === 'string' &&
    Array.isArray(paths) &&
    paths.every((p) => typeof p === 'string')
  );
}
