/** Open-addressing table from basis state, some wires left out, to a slot number in order of first appearance. */
export class KeyTable {
  readonly #keep: Uint32Array;
  readonly #mask: number;
  readonly #slots: Int32Array;
  readonly #keys: Uint32Array;
  size = 0;

  /** @param keep - masks of the wires that count, one a word */
  constructor(entries: number, keep: Uint32Array) {
    let buckets = 16;
    while (buckets < 2 * entries) buckets *= 2;
    this.#keep = keep;
    this.#mask = buckets - 1;
    this.#slots = new Int32Array(buckets).fill(-1);
    this.#keys = new Uint32Array(entries * keep.length);
  }

  find(keys: Uint32Array, at: number): number {
    const keep = this.#keep;
    const words = keep.length;
    let hash = 0x811c9dc5;
    for (let w = 0; w < words; w++) {
      hash = Math.imul(hash ^ (keys[at + w]! & keep[w]!), 0x9e3779b1);
      hash ^= hash >>> 15;
    }
    for (let bucket = hash & this.#mask; ; bucket = (bucket + 1) & this.#mask) {
      const slot = this.#slots[bucket]!;
      if (slot < 0) {
        this.#slots[bucket] = this.size;
        for (let w = 0; w < words; w++) this.#keys[this.size * words + w] = keys[at + w]! & keep[w]!;
        return this.size++;
      }
      let equal = true;
      for (let w = 0; w < words && equal; w++) {
        // Typed arrays hold unsigned words, the masked value is signed.
        equal = this.#keys[slot * words + w] === (keys[at + w]! & keep[w]!) >>> 0;
      }
      if (equal) return slot;
    }
  }

  copyKey(slot: number, keys: Uint32Array, at: number): void {
    const words = this.#keep.length;
    for (let w = 0; w < words; w++) keys[at + w] = this.#keys[slot * words + w]!;
  }
}
