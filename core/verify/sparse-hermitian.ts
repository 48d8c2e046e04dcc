/**
 * Hermitian matrix by its diagonal and the elements below it, column by column: column j holds the rows
 * `row[start[j]…start[j+1])`, all larger than j.
 */
export interface SparseHermitian {
  readonly dim: number;
  readonly diagonal: Float64Array;
  readonly start: Uint32Array;
  readonly row: Uint32Array;
  readonly re: Float64Array;
  /** Length 0 for a real matrix. */
  readonly im: Float64Array;
}

/** Growing store of the elements below the diagonal. */
export class Columns {
  private readonly start: Uint32Array;
  private row: Uint32Array<ArrayBuffer>;
  private re: Float64Array<ArrayBuffer>;
  private im: Float64Array<ArrayBuffer>;
  private size = 0;
  private real = true;

  constructor(private readonly dim: number) {
    this.start = new Uint32Array(dim + 1);
    const first = Math.max(16, 32 * dim);
    this.row = new Uint32Array(first);
    this.re = new Float64Array(first);
    this.im = new Float64Array(first);
  }

  push(row: number, x: number, y: number, cut: number): void {
    const re = Math.abs(x) > cut ? x : 0;
    const im = Math.abs(y) > cut ? y : 0;
    if (re === 0 && im === 0) return;
    if (this.size === this.row.length) this.grow();
    this.row[this.size] = row;
    this.re[this.size] = re;
    this.im[this.size] = im;
    if (im !== 0) this.real = false;
    this.size++;
  }

  closeColumn(column: number): void {
    this.start[column + 1] = this.size;
  }

  finish(diagonal: Float64Array): SparseHermitian {
    const { dim, start, size } = this;
    return {
      dim,
      diagonal,
      start,
      row: this.row.slice(0, size),
      re: this.re.slice(0, size),
      im: this.real ? new Float64Array(0) : this.im.slice(0, size),
    };
  }

  private grow(): void {
    const length = Math.ceil(1.5 * this.row.length);
    const copy = <T extends Uint32Array | Float64Array>(from: T, to: T): T => {
      to.set(from);
      return to;
    };
    this.row = copy(this.row, new Uint32Array(length));
    this.re = copy(this.re, new Float64Array(length));
    this.im = copy(this.im, new Float64Array(length));
  }
}
