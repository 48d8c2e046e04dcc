// C += alpha·A·B on packed panels. All arguments are positions and strides in numbers, not bytes.

const TILE: i32 = 4; // rows and columns of C that live in registers: 8 accumulators of two numbers
const BLOCK_M: i32 = 96; // packed A: 96×256, 196 kB
const BLOCK_K: i32 = 256;
const BLOCK_N: i32 = 512; // packed B: 256×512, 1 MB

const packedA = memory.data(96 * 256 * 8, 16);
const packedB = memory.data(256 * 512 * 8, 16);
const edge = memory.data(16 * 8, 16);

/**
 * C(m×n, row stride ldc) += alpha·A(m×k)·B(k×n). Element (i,p) of A is at a + i·ars + p·acs, and of B at b + p·brs + j·bcs,
 * so a transposed operand is a swap of its strides.
 */
export function gemm(
  m: i32, n: i32, k: i32, alpha: f64,
  a: i32, ars: i32, acs: i32,
  b: i32, brs: i32, bcs: i32,
  c: i32, ldc: i32,
): void {
  for (let jc = 0; jc < n; jc += BLOCK_N) {
    const nb = min(BLOCK_N, n - jc);
    for (let pc = 0; pc < k; pc += BLOCK_K) {
      const kb = min(BLOCK_K, k - pc);
      pack(packedB, b + pc * brs + jc * bcs, nb, kb, bcs, brs, 1.0);
      for (let ic = 0; ic < m; ic += BLOCK_M) {
        const mb = min(BLOCK_M, m - ic);
        pack(packedA, a + ic * ars + pc * acs, mb, kb, ars, acs, alpha);
        multiplyPanels(mb, nb, kb, <usize>(c + ic * ldc + jc) << 3, <usize>ldc << 3);
      }
    }
  }
}

function multiplyPanels(m: i32, n: i32, k: i32, c: usize, ldc: usize): void {
  for (let j = 0; j < n; j += TILE) {
    const bp = packedB + (<usize>(j * k) << 3);
    for (let i = 0; i < m; i += TILE) {
      const ap = packedA + (<usize>(i * k) << 3);
      const target = c + <usize>i * ldc + (<usize>j << 3);
      if (m - i >= TILE && n - j >= TILE) {
        tile(ap, bp, k, target, ldc);
      } else {
        memory.fill(edge, 0, 128);
        tile(ap, bp, k, edge, 32);
        addCorner(target, ldc, min(TILE, m - i), min(TILE, n - j));
      }
    }
  }
}

function addCorner(c: usize, ldc: usize, rows: i32, cols: i32): void {
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < cols; j++) {
      const to = c + <usize>i * ldc + (<usize>j << 3);
      store<f64>(to, load<f64>(to) + load<f64>(edge + (<usize>(i * TILE + j) << 3)));
    }
  }
}

/** Lays `count` lines of `depth` numbers out as bands of four lines, interleaved and padded with zeros. */
function pack(to: usize, from: i32, count: i32, depth: i32, line: i32, step: i32, alpha: f64): void {
  const stride = <usize>step << 3;
  const gap = <usize>line << 3;
  for (let i = 0; i < count; i += TILE) {
    const s0 = <usize>(from + i * line) << 3;
    if (count - i >= TILE) {
      const factor = f64x2.splat(alpha);
      for (let p = 0, s = s0; p < depth; p++, s += stride, to += 32) {
        const low = v128.load64_lane(s + gap, v128.load64_zero(s), 1);
        const high = v128.load64_lane(s + 3 * gap, v128.load64_zero(s + 2 * gap), 1);
        v128.store(to, f64x2.mul(factor, low));
        v128.store(to, f64x2.mul(factor, high), 16);
      }
    } else {
      const height = <usize>(count - i);
      for (let p = 0, s = s0; p < depth; p++, s += stride, to += 32) {
        for (let r: usize = 0; r < 4; r++) {
          store<f64>(to + (r << 3), r < height ? alpha * load<f64>(s + r * gap) : 0);
        }
      }
    }
  }
}

// @ts-ignore: decorator
@inline
function madd(sum: v128, x: v128, y: v128): v128 {
  return f64x2.add(sum, f64x2.mul(x, y));
}

// @ts-ignore: decorator
@inline
function addTo(c: usize, low: v128, high: v128): void {
  v128.store(c, f64x2.add(v128.load(c), low));
  v128.store(c, f64x2.add(v128.load(c, 16), high), 16);
}

/** C(4×4) += packed band of A times packed band of B. */
function tile(a: usize, b: usize, k: i32, c: usize, ldc: usize): void {
  let c00 = f64x2.splat(0), c01 = c00, c10 = c00, c11 = c00, c20 = c00, c21 = c00, c30 = c00, c31 = c00;
  const end = a + (<usize>k << 5);
  while (a < end) {
    const b0 = v128.load(b), b1 = v128.load(b, 16);
    let x = v128.load_splat<f64>(a);
    c00 = madd(c00, x, b0); c01 = madd(c01, x, b1);
    x = v128.load_splat<f64>(a, 8);
    c10 = madd(c10, x, b0); c11 = madd(c11, x, b1);
    x = v128.load_splat<f64>(a, 16);
    c20 = madd(c20, x, b0); c21 = madd(c21, x, b1);
    x = v128.load_splat<f64>(a, 24);
    c30 = madd(c30, x, b0); c31 = madd(c31, x, b1);
    a += 32;
    b += 32;
  }
  addTo(c, c00, c01); c += ldc;
  addTo(c, c10, c11); c += ldc;
  addTo(c, c20, c21); c += ldc;
  addTo(c, c30, c31);
}
