/** One bit a slot: which elements of an array a file has listed. */
export class SlotSet {
  private readonly words: Int32Array;

  constructor(size: number) {
    this.words = new Int32Array(Math.ceil(size / 32));
  }

  has(slot: number): boolean {
    return ((this.words[Math.floor(slot / 32)] >>> (slot & 31)) & 1) === 1;
  }

  add(slot: number): void {
    this.words[Math.floor(slot / 32)] |= 1 << (slot & 31);
  }

  /** Ascending. */
  *members(): Generator<number> {
    const { words } = this;
    for (let w = 0; w < words.length; w++) {
      for (let rest = words[w]; rest !== 0; rest &= rest - 1) yield w * 32 + 31 - Math.clz32(rest & -rest);
    }
  }
}

/** Two entries for one integral are the same if they differ by no more than this, relative to the largest. */
export const SAME_ENTRY = 1e-10;

/** Remembers the worst disagreement between two entries for one integral, of one array. */
export class Disagreement {
  private worst = 0;
  private line = 0;
  private slot = -1;

  note(slot: number, difference: number, line: number): void {
    if (difference <= this.worst) return;
    this.worst = difference;
    this.line = line;
    this.slot = slot;
  }

  /** Where it is too large for an array whose largest element is `scale`: the slot and the later line. */
  beyond(scale: number): { slot: number; line: number; difference: number } | null {
    if (this.worst <= SAME_ENTRY * scale) return null;
    return { slot: this.slot, line: this.line, difference: this.worst };
  }
}
