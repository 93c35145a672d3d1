import { randomSource } from './generator';

/**
 * Points that fill the unit cube evenly, seeded.
 *
 * The first 21 coordinates are Sobol's sequence with the direction numbers of Joe & Kuo 2008 (SIAM J Sci Comput
 * 30:2635), scrambled by a hashed nested permutation (Owen 1995; Burley 2020, J Comput Graph Tech 9:1). Further
 * coordinates are Latin hypercube columns (McKay, Beckman & Conover 1979): one point in every n-th part.
 * `count` points of `dimensions` coordinates, each strictly between 0 and 1.
 */
export function evenPoints(count: number, dimensions: number, seed: number): Float64Array[] {
  const random = randomSource(seed);
  const points = Array.from({ length: count }, () => new Float64Array(dimensions));
  for (let d = 0; d < dimensions; d += 1) {
    const column = d < POLYNOMIALS.length + 1 ? sobol(count, d, random.below(2 ** 32)) : null;
    const strata = column ?? latin(count, random);
    for (let i = 0; i < count; i += 1) points[i]![d] = strata[i]!;
  }
  return points;
}

function latin(count: number, random: ReturnType<typeof randomSource>): Float64Array {
  const order = Array.from({ length: count }, (_, i) => i);
  for (let i = count - 1; i > 0; i -= 1) {
    const j = random.below(i + 1);
    [order[i], order[j]] = [order[j]!, order[i]!];
  }
  const tiny = 2 ** -32;
  return Float64Array.from(order, (k) => (k + Math.max(tiny, random.uniform())) / count);
}

/** Degree, coefficients of the primitive polynomial, and initial numbers m, for coordinates 2 to 21. */
const POLYNOMIALS: readonly (readonly [number, number, readonly number[]])[] = [
  [1, 0, [1]],
  [2, 1, [1, 3]],
  [3, 1, [1, 3, 1]],
  [3, 2, [1, 1, 1]],
  [4, 1, [1, 1, 3, 3]],
  [4, 4, [1, 3, 5, 13]],
  [5, 2, [1, 1, 5, 5, 17]],
  [5, 4, [1, 1, 5, 5, 5]],
  [5, 7, [1, 1, 7, 11, 19]],
  [5, 11, [1, 1, 5, 1, 1]],
  [5, 13, [1, 1, 1, 3, 11]],
  [5, 14, [1, 3, 5, 5, 31]],
  [6, 1, [1, 3, 3, 9, 7, 49]],
  [6, 13, [1, 1, 1, 15, 21, 21]],
  [6, 16, [1, 3, 1, 13, 27, 49]],
  [6, 19, [1, 1, 1, 15, 7, 5]],
  [6, 22, [1, 3, 1, 15, 13, 25]],
  [6, 25, [1, 1, 5, 5, 19, 61]],
  [7, 1, [1, 3, 7, 11, 23, 15, 103]],
  [7, 4, [1, 3, 7, 13, 13, 15, 69]],
];
const BITS = 32;

function directions(coordinate: number): Uint32Array {
  const v = new Uint32Array(BITS);
  if (coordinate === 0) {
    for (let i = 0; i < BITS; i += 1) v[i] = 2 ** (BITS - 1 - i);
    return v;
  }
  const [degree, coefficients, m] = POLYNOMIALS[coordinate - 1]!;
  for (let i = 0; i < BITS; i += 1) {
    if (i < degree) {
      v[i] = m[i]! * 2 ** (BITS - 1 - i);
      continue;
    }
    let word = v[i - degree]! ^ (v[i - degree]! >>> degree);
    for (let k = 1; k < degree; k += 1) {
      if ((coefficients >>> (degree - 1 - k)) & 1) word ^= v[i - k]!;
    }
    v[i] = word;
  }
  return v;
}

function sobol(count: number, coordinate: number, seed: number): Float64Array {
  const v = directions(coordinate);
  const out = new Float64Array(count);
  let word = 0;
  for (let i = 0; i < count; i += 1) {
    out[i] = (scramble(word >>> 0, seed) + 0.5) / 2 ** BITS;
    // Gray code: the next point differs by the direction of the lowest zero bit of i.
    word ^= v[31 - Math.clz32(~i & -~i)]!;
  }
  return out;
}

function scramble(word: number, seed: number): number {
  let x = (reverseBits(word) + seed) | 0;
  x ^= Math.imul(x, 0x6c50b47c);
  x ^= Math.imul(x, 0xb82f1e52);
  x ^= Math.imul(x, 0xc7afe638);
  x ^= Math.imul(x, 0x8d22f6e6);
  return reverseBits(x);
}

function reverseBits(word: number): number {
  let x = word;
  x = ((x >>> 1) & 0x55555555) | ((x & 0x55555555) << 1);
  x = ((x >>> 2) & 0x33333333) | ((x & 0x33333333) << 2);
  x = ((x >>> 4) & 0x0f0f0f0f) | ((x & 0x0f0f0f0f) << 4);
  x = ((x >>> 8) & 0x00ff00ff) | ((x & 0x00ff00ff) << 8);
  return ((x >>> 16) | (x << 16)) >>> 0;
}
