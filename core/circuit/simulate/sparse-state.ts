import type { GateKind, GateSink } from '../gates/machine';
import { KeyTable } from './key-table';

export interface SparseStateOptions {
  /** Wires the state has room for. @defaultValue 96 */
  readonly maxWires?: number;
  /** Seed of the measurement outcomes. @defaultValue 1 */
  readonly seed?: number;
  /**
   * Outcome of every measurement where it is possible: `random` samples, 0 and 1 force the branch (a branch of
   * probability zero is never taken). @defaultValue 'random'
   */
  readonly outcomes?: 'random' | 0 | 1;
  /** Amplitudes below this modulus are dropped after a Hadamard. @defaultValue 1e-15 */
  readonly cutoff?: number;
}

/** What a diagonal gate multiplies by where all of its wires are 1. */
const PHASES = {
  Z: [-1, 0],
  CZ: [-1, 0],
  CCZ: [-1, 0],
  S: [0, 1],
  SDG: [0, -1],
  T: [Math.SQRT1_2, Math.SQRT1_2],
  TDG: [Math.SQRT1_2, -Math.SQRT1_2],
} as const;

/** Tolerance on a wire that must be |0⟩ when it is released or written by AND. */
const STRAY = 1e-9;

/**
 * State vector as a list of basis states with amplitudes. Reversible logic and phases touch each entry in place;
 * only a Hadamard has to bring pairs together, through a hash of the basis state. Circuits for block encodings
 * keep most wires in few basis states, so a hundred wires are no obstacle.
 */
export class SparseState implements GateSink {
  readonly #words: number;
  #capacity = 16;
  #count = 1;
  #keys: Uint32Array;
  #re: Float64Array;
  #im: Float64Array;
  readonly #bits: boolean[] = [];
  readonly #outcomes: 'random' | 0 | 1;
  readonly #cutoff: number;
  #random: number;

  /** Starts with every wire |0⟩. */
  constructor(options: SparseStateOptions = {}) {
    this.#words = Math.ceil((options.maxWires ?? 96) / 32);
    this.#outcomes = options.outcomes ?? 'random';
    this.#cutoff = options.cutoff ?? 1e-15;
    this.#random = options.seed ?? 1;
    this.#keys = new Uint32Array(this.#capacity * this.#words);
    this.#re = new Float64Array(this.#capacity);
    this.#im = new Float64Array(this.#capacity);
    this.#re[0] = 1;
  }

  /** Number of basis states with an amplitude. */
  get size(): number {
    return this.#count;
  }

  /** Replaces the state by a superposition; each entry lists the wires that are 1. Not normalised here. */
  load(entries: readonly { readonly ones: readonly number[]; readonly amplitude: number }[]): void {
    this.#reserve(entries.length);
    this.#count = entries.length;
    this.#keys.fill(0);
    for (const [i, { ones, amplitude }] of entries.entries()) {
      for (const wire of ones) {
        const { word, mask } = this.#locate(wire);
        this.#keys[i * this.#words + word]! |= mask;
      }
      this.#re[i] = amplitude;
      this.#im[i] = 0;
    }
  }

  gate(kind: GateKind, a: number, b: number, c: number, condition: number): void {
    if (condition >= 0 && !this.#bits[condition]) return;
    switch (kind) {
      case 'X':
        this.#flip(-1, -1, a);
        break;
      case 'CX':
        this.#flip(a, -1, b);
        break;
      case 'AND':
        this.#expectZero(c, 'an AND writes into it');
        this.#flip(a, b, c);
        break;
      case 'CCX':
        this.#flip(a, b, c);
        break;
      case 'UNAND':
        this.#unAnd(a, b, c);
        break;
      case 'SWAP':
        this.#swap(a, b);
        break;
      case 'H':
        this.#hadamard(a);
        break;
      default: {
        const [re, im] = PHASES[kind];
        this.#phase(a, b, c, re, im);
      }
    }
  }

  rotateZ(wire: number, angle: number): void {
    const { word, mask } = this.#locate(wire);
    const cos = Math.cos(angle / 2);
    const sin = Math.sin(angle / 2);
    for (let i = 0; i < this.#count; i++) {
      const sign = (this.#keys[i * this.#words + word]! & mask) !== 0 ? 1 : -1;
      const re = this.#re[i]!;
      const im = this.#im[i]!;
      this.#re[i] = re * cos - im * sign * sin;
      this.#im[i] = im * cos + re * sign * sin;
    }
  }

  measureX(wire: number, bit: number): void {
    this.measureRegisterX([wire], bit);
  }

  measureRegisterX(wires: readonly number[], firstBit: number): void {
    if (!this.#areFunctions(wires)) {
      for (const [i, wire] of wires.entries()) {
        this.#hadamard(wire);
        this.#bits[firstBit + i] = this.#measure(wire);
      }
      return;
    }
    // The wires are functions of the others: every outcome is equally likely and only signs change.
    const clear = new Uint32Array(this.#words);
    const odd = new Uint32Array(this.#words);
    for (const [i, wire] of wires.entries()) {
      const outcome = this.#outcomes === 'random' ? this.#nextRandom() < 0.5 : this.#outcomes === 1;
      this.#bits[firstBit + i] = outcome;
      const { word, mask } = this.#locate(wire);
      clear[word]! |= mask;
      if (outcome) odd[word]! |= mask;
    }
    for (let i = 0, at = 0; i < this.#count; i++, at += this.#words) {
      let parity = 0;
      for (let w = 0; w < this.#words; w++) {
        parity ^= this.#keys[at + w]! & odd[w]!;
        this.#keys[at + w]! &= ~clear[w]!;
      }
      if (isOdd(parity)) {
        this.#re[i] = -this.#re[i]!;
        this.#im[i] = -this.#im[i]!;
      }
    }
  }

  allocate(wire: number): void {
    this.#locate(wire);
  }

  release(wire: number): void {
    this.#expectZero(wire, 'it is released');
  }

  enter(): void {}

  leave(): void {}

  /** Calls `callback` for each basis state that has an amplitude. */
  visit(callback: (isSet: (wire: number) => boolean, re: number, im: number) => void): void {
    for (let i = 0; i < this.#count; i++) {
      const at = i * this.#words;
      callback(
        (wire) => ((this.#keys[at + (wire >>> 5)]! >>> (wire & 31)) & 1) === 1,
        this.#re[i]!,
        this.#im[i]!,
      );
    }
  }

  /** Σ |amplitude|²: 1 but for rounding. */
  norm(): number {
    let sum = 0;
    for (let i = 0; i < this.#count; i++) sum += this.#re[i]! ** 2 + this.#im[i]! ** 2;
    return sum;
  }

  #locate(wire: number): { word: number; mask: number } {
    const word = wire >>> 5;
    if (wire < 0 || word >= this.#words) {
      throw new RangeError(`wire ${wire} is outside the ${this.#words * 32} wires of this state`);
    }
    return { word, mask: 1 << (wire & 31) };
  }

  #flip(a: number, b: number, target: number): void {
    const { word, mask } = this.#locate(target);
    const first = a >= 0 ? this.#locate(a) : null;
    const second = b >= 0 ? this.#locate(b) : null;
    const words = this.#words;
    const keys = this.#keys;
    for (let i = 0, at = 0; i < this.#count; i++, at += words) {
      if (first && (keys[at + first.word]! & first.mask) === 0) continue;
      if (second && (keys[at + second.word]! & second.mask) === 0) continue;
      keys[at + word]! ^= mask;
    }
  }

  #swap(a: number, b: number): void {
    this.#flip(a, -1, b);
    this.#flip(b, -1, a);
    this.#flip(a, -1, b);
  }

  /** Multiplies by re + i·im where all of the given wires are 1. */
  #phase(a: number, b: number, c: number, re: number, im: number): void {
    const first = this.#locate(a);
    const second = b >= 0 ? this.#locate(b) : first;
    const third = c >= 0 ? this.#locate(c) : first;
    const words = this.#words;
    const keys = this.#keys;
    for (let i = 0, at = 0; i < this.#count; i++, at += words) {
      if ((keys[at + first.word]! & first.mask) === 0) continue;
      if ((keys[at + second.word]! & second.mask) === 0) continue;
      if ((keys[at + third.word]! & third.mask) === 0) continue;
      const x = this.#re[i]!;
      const y = this.#im[i]!;
      this.#re[i] = x * re - y * im;
      this.#im[i] = x * im + y * re;
    }
  }

  #unAnd(a: number, b: number, target: number): void {
    if (this.#outcomes === 'random' && this.#clearProduct(a, b, target)) return;
    this.#hadamard(target);
    if (this.#measure(target)) this.#phase(a, b, -1, -1, 0);
  }

  /**
   * Where the wire holds a·b throughout, measuring it gives either outcome with probability ½, and with the CZ of
   * outcome 1 both leave the same state: the wire cleared. Saves two passes through a hash table; forced outcomes
   * take the long way, so that both branches are tried.
   */
  #clearProduct(a: number, b: number, target: number): boolean {
    const first = this.#locate(a);
    const second = this.#locate(b);
    const { word, mask } = this.#locate(target);
    const words = this.#words;
    const keys = this.#keys;
    for (let i = 0, at = 0; i < this.#count; i++, at += words) {
      const product =
        (keys[at + first.word]! & first.mask) !== 0 && (keys[at + second.word]! & second.mask) !== 0;
      if (((keys[at + word]! & mask) !== 0) !== product) return false;
    }
    for (let i = 0, at = word; i < this.#count; i++, at += words) keys[at]! &= ~mask;
    return true;
  }

  /** Whether no two basis states agree in all other wires. */
  #areFunctions(wires: readonly number[]): boolean {
    const keep = new Uint32Array(this.#words).fill(0xffffffff);
    for (const wire of wires) {
      const { word, mask } = this.#locate(wire);
      keep[word]! &= ~mask;
    }
    const others = new KeyTable(this.#count, keep);
    for (let i = 0; i < this.#count; i++) {
      if (others.find(this.#keys, i * this.#words) !== i) return false;
    }
    return true;
  }

  #hadamard(wire: number): void {
    const { word, mask } = this.#locate(wire);
    const words = this.#words;
    const keep = new Uint32Array(words).fill(0xffffffff);
    keep[word]! &= ~mask;
    const pairs = new KeyTable(this.#count, keep);
    const oldKeys = this.#keys;
    const zeroRe = new Float64Array(this.#count);
    const zeroIm = new Float64Array(this.#count);
    const oneRe = new Float64Array(this.#count);
    const oneIm = new Float64Array(this.#count);
    for (let i = 0, at = 0; i < this.#count; i++, at += words) {
      const isOne = (oldKeys[at + word]! & mask) !== 0;
      const slot = pairs.find(oldKeys, at);
      if (isOne) {
        oneRe[slot]! += this.#re[i]!;
        oneIm[slot]! += this.#im[i]!;
      } else {
        zeroRe[slot]! += this.#re[i]!;
        zeroIm[slot]! += this.#im[i]!;
      }
    }
    this.#reserve(2 * pairs.size);
    let count = 0;
    const push = (slot: number, one: boolean, re: number, im: number) => {
      if (Math.abs(re) <= this.#cutoff && Math.abs(im) <= this.#cutoff) return;
      const at = count * words;
      pairs.copyKey(slot, this.#keys, at);
      if (one) this.#keys[at + word]! |= mask;
      this.#re[count] = re;
      this.#im[count] = im;
      count++;
    };
    const s = Math.SQRT1_2;
    for (let slot = 0; slot < pairs.size; slot++) {
      push(slot, false, (zeroRe[slot]! + oneRe[slot]!) * s, (zeroIm[slot]! + oneIm[slot]!) * s);
      push(slot, true, (zeroRe[slot]! - oneRe[slot]!) * s, (zeroIm[slot]! - oneIm[slot]!) * s);
    }
    this.#count = count;
  }

  /** Measures in the Z basis and leaves the wire |0⟩. */
  #measure(wire: number): boolean {
    const { word, mask } = this.#locate(wire);
    const words = this.#words;
    let one = 0;
    let all = 0;
    for (let i = 0, at = 0; i < this.#count; i++, at += words) {
      const p = this.#re[i]! ** 2 + this.#im[i]! ** 2;
      all += p;
      if ((this.#keys[at + word]! & mask) !== 0) one += p;
    }
    const possible = [all - one > STRAY * all, one > STRAY * all];
    let outcome: boolean;
    if (!possible[0] || !possible[1]) outcome = possible[1]!;
    else if (this.#outcomes === 'random') outcome = this.#nextRandom() * all < one;
    else outcome = this.#outcomes === 1;
    const scale = Math.sqrt(all / (outcome ? one : all - one));
    let count = 0;
    for (let i = 0, at = 0; i < this.#count; i++, at += words) {
      if (((this.#keys[at + word]! & mask) !== 0) !== outcome) continue;
      const to = count * words;
      for (let w = 0; w < words; w++) this.#keys[to + w] = this.#keys[at + w]!;
      this.#keys[to + word]! &= ~mask;
      this.#re[count] = this.#re[i]! * scale;
      this.#im[count] = this.#im[i]! * scale;
      count++;
    }
    this.#count = count;
    return outcome;
  }

  #expectZero(wire: number, why: string): void {
    const { word, mask } = this.#locate(wire);
    let stray = 0;
    for (let i = 0; i < this.#count; i++) {
      if ((this.#keys[i * this.#words + word]! & mask) !== 0) stray += this.#re[i]! ** 2 + this.#im[i]! ** 2;
    }
    if (stray > STRAY ** 2) throw new Error(`wire ${wire} is 1 with probability ${stray}, but ${why}`);
  }

  #reserve(entries: number): void {
    if (entries <= this.#capacity) return;
    while (this.#capacity < entries) this.#capacity *= 2;
    const keys = new Uint32Array(this.#capacity * this.#words);
    keys.set(this.#keys);
    const re = new Float64Array(this.#capacity);
    re.set(this.#re);
    const im = new Float64Array(this.#capacity);
    im.set(this.#im);
    this.#keys = keys;
    this.#re = re;
    this.#im = im;
  }

  /** Mulberry32: small, seeded and good enough to choose outcomes. */
  #nextRandom(): number {
    this.#random = (this.#random + 0x6d2b79f5) | 0;
    let t = Math.imul(this.#random ^ (this.#random >>> 15), 1 | this.#random);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  }
}

function isOdd(bits: number): boolean {
  let x = bits ^ (bits >>> 16);
  x ^= x >>> 8;
  x ^= x >>> 4;
  x ^= x >>> 2;
  x ^= x >>> 1;
  return (x & 1) === 1;
}
