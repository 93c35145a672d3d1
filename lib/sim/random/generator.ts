/** A seeded source of uniform and normal deviates; equal seeds give equal sequences. */
export interface RandomSource {
  /** Uniform on [0, 1), 53 random bits. */
  uniform(): number;
  /** Standard normal. */
  normal(): number;
  /** Whole number, uniform on 0 … below − 1. */
  below(count: number): number;
}

/** One round of splitmix32 (Steele, Lea & Flood 2014), which spreads a small seed over all bits. */
function splitmix(state: number): { state: number; word: number } {
  const next = (state + 0x9e3779b9) | 0;
  let word = next ^ (next >>> 16);
  word = Math.imul(word, 0x21f0aaad);
  word ^= word >>> 15;
  word = Math.imul(word, 0x735a2d97);
  return { state: next, word: (word ^ (word >>> 15)) >>> 0 };
}

/**
 * The generator sfc32 (C. Doty-Humphrey, PractRand): 128 bits of state, period at least 2^32.
 * Normal deviates by the polar method (Marsaglia & Bray 1964). `seed` is a whole number ≥ 0;
 * seeds above 2^32 count with all their bits.
 */
export function randomSource(seed: number): RandomSource {
  const low = splitmix(seed >>> 0);
  const high = splitmix(Math.floor(seed / 4294967296) ^ low.word);
  let a = low.word;
  let b = high.word;
  let c = splitmix(low.word ^ 0x5bd1e995).word;
  let counter = 1;
  const word = (): number => {
    const out = (a + b + counter) | 0;
    counter = (counter + 1) | 0;
    a = b ^ (b >>> 9);
    b = (c + (c << 3)) | 0;
    c = ((c << 21) | (c >>> 11)) + out;
    c |= 0;
    return out >>> 0;
  };
  for (let i = 0; i < 16; i += 1) word();
  const uniform = (): number => ((word() >>> 5) * 67108864 + (word() >>> 6)) / 9007199254740992;
  let spare: number | null = null;
  const normal = (): number => {
    if (spare !== null) {
      const kept = spare;
      spare = null;
      return kept;
    }
    for (;;) {
      const x = 2 * uniform() - 1;
      const y = 2 * uniform() - 1;
      const square = x * x + y * y;
      if (square >= 1 || square === 0) continue;
      const factor = Math.sqrt((-2 * Math.log(square)) / square);
      spare = y * factor;
      return x * factor;
    }
  };
  return { uniform, normal, below: (count) => Math.floor(uniform() * count) };
}
