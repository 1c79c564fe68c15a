// AssemblyScript (the dialect of TypeScript that compiles to WebAssembly), not TypeScript: `npm run kernels` compiles it into ../kernel-bytes.ts.
// All work is on a tile that the caller lays into memory: `tileRows` rows of up to `columns` columns, one column after another, filled up with zeros.

const tileRows: usize = 64;
const stride: usize = tileRows * 8;

/** Adds the tile's XᵀX to `gram` (columns × columns, row by row; only blocks on and above the diagonal). columns: a multiple of 3. */
export function addGram(tile: usize, columns: usize, gram: usize): void {
  for (let i: usize = 0; i < columns; i += 3) {
    const x0 = tile + i * stride;
    for (let j: usize = i; j < columns; j += 3) {
      const y0 = tile + j * stride;
      let s00 = f64x2.splat(0);
      let s01 = f64x2.splat(0);
      let s02 = f64x2.splat(0);
      let s10 = f64x2.splat(0);
      let s11 = f64x2.splat(0);
      let s12 = f64x2.splat(0);
      let s20 = f64x2.splat(0);
      let s21 = f64x2.splat(0);
      let s22 = f64x2.splat(0);
      for (let at: usize = 0; at < stride; at += 16) {
        const a0 = v128.load(x0 + at);
        const a1 = v128.load(x0 + at, 512);
        const a2 = v128.load(x0 + at, 1024);
        const b0 = v128.load(y0 + at);
        const b1 = v128.load(y0 + at, 512);
        const b2 = v128.load(y0 + at, 1024);
        s00 = f64x2.add(s00, f64x2.mul(a0, b0));
        s01 = f64x2.add(s01, f64x2.mul(a0, b1));
        s02 = f64x2.add(s02, f64x2.mul(a0, b2));
        s10 = f64x2.add(s10, f64x2.mul(a1, b0));
        s11 = f64x2.add(s11, f64x2.mul(a1, b1));
        s12 = f64x2.add(s12, f64x2.mul(a1, b2));
        s20 = f64x2.add(s20, f64x2.mul(a2, b0));
        s21 = f64x2.add(s21, f64x2.mul(a2, b1));
        s22 = f64x2.add(s22, f64x2.mul(a2, b2));
      }
      const g0 = gram + (i * columns + j) * 8;
      const g1 = g0 + columns * 8;
      const g2 = g1 + columns * 8;
      addHalves(g0, s00);
      addHalves(g0 + 8, s01);
      addHalves(g0 + 16, s02);
      addHalves(g1, s10);
      addHalves(g1 + 8, s11);
      addHalves(g1 + 16, s12);
      addHalves(g2, s20);
      addHalves(g2 + 8, s21);
      addHalves(g2 + 16, s22);
    }
  }
}

function addHalves(to: usize, sum: v128): void {
  f64.store(to, f64.load(to) + f64x2.extract_lane(sum, 0) + f64x2.extract_lane(sum, 1));
}

/**
 * Writes the squared length of each of the tile's rows times `upper` (columns × columns, row by row, zeros below its diagonal) to `lengths`.
 * columns: a multiple of 3.
 */
export function measureRows(tile: usize, columns: usize, upper: usize, lengths: usize): void {
  for (let at: usize = 0; at < stride; at += 32) {
    let first = f64x2.splat(0);
    let second = f64x2.splat(0);
    for (let c: usize = 0; c < columns; c += 3) {
      let a0 = f64x2.splat(0);
      let a1 = f64x2.splat(0);
      let a2 = f64x2.splat(0);
      let b0 = f64x2.splat(0);
      let b1 = f64x2.splat(0);
      let b2 = f64x2.splat(0);
      let x = tile + at;
      let u = upper + c * 8;
      for (let k: usize = 0; k < c + 3; k += 1) {
        const xa = v128.load(x);
        const xb = v128.load(x, 16);
        const u0 = v128.load64_splat(u);
        const u1 = v128.load64_splat(u, 8);
        const u2 = v128.load64_splat(u, 16);
        a0 = f64x2.add(a0, f64x2.mul(xa, u0));
        a1 = f64x2.add(a1, f64x2.mul(xa, u1));
        a2 = f64x2.add(a2, f64x2.mul(xa, u2));
        b0 = f64x2.add(b0, f64x2.mul(xb, u0));
        b1 = f64x2.add(b1, f64x2.mul(xb, u1));
        b2 = f64x2.add(b2, f64x2.mul(xb, u2));
        x += stride;
        u += columns * 8;
      }
      first = f64x2.add(first, f64x2.add(f64x2.mul(a0, a0), f64x2.add(f64x2.mul(a1, a1), f64x2.mul(a2, a2))));
      second = f64x2.add(second, f64x2.add(f64x2.mul(b0, b0), f64x2.add(f64x2.mul(b1, b1), f64x2.mul(b2, b2))));
    }
    v128.store(lengths + at, first);
    v128.store(lengths + at, second, 16);
  }
}
