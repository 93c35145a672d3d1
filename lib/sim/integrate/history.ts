/**
 * The continuous record of a course: one quartic a step for each of n variables, and a constant before the first.
 * Steps follow each other without gaps; old ones can be dropped.
 */
export class History {
  /** Begin, length of each step, and its 5n coefficients; steps `first` … `count` − 1 are in use. */
  private begin: Float64Array = new Float64Array(64);
  private length: Float64Array = new Float64Array(64);
  private pieces: Float64Array;
  private first = 0;
  private count = 0;
  private last: number;

  constructor(
    readonly n: number,
    /** The state before the first step, for all times. */
    readonly before: Float64Array,
    startTime = 0,
  ) {
    this.pieces = new Float64Array(64 * 5 * n);
    this.last = startTime;
  }

  /** A record of its own with the same content. */
  copy(): History {
    const other = new History(this.n, this.before, this.last);
    other.begin = this.begin.slice(this.first, this.count);
    other.length = this.length.slice(this.first, this.count);
    other.pieces = this.pieces.slice(this.first * 5 * this.n, this.count * 5 * this.n);
    other.count = this.count - this.first;
    return other;
  }

  /** Time where the record ends. */
  get end(): number {
    return this.last;
  }

  /** Adds the step [t, t + h] with coefficients c (5n, row by row, see `quartic`). */
  append(t: number, h: number, end: number, c: Float64Array): void {
    if (this.count === this.begin.length) this.makeRoom();
    this.begin[this.count] = t;
    this.length[this.count] = h;
    this.pieces.set(c, this.count * 5 * this.n);
    this.count += 1;
    this.last = end;
  }

  /** Moves the record to the front, into arrays twice as long where it fills more than half. */
  private makeRoom(): void {
    const used = this.count - this.first;
    const width = 5 * this.n;
    const size = used > this.begin.length / 2 ? 2 * used + 64 : this.begin.length;
    const move = (list: Float64Array, each: number) => {
      const moved = size === this.begin.length ? list : new Float64Array(size * each);
      moved.set(list.subarray(this.first * each, this.count * each));
      return moved;
    };
    const begin = move(this.begin, 1);
    const length = move(this.length, 1);
    this.pieces = move(this.pieces, width);
    this.begin = begin;
    this.length = length;
    this.first = 0;
    this.count = used;
  }

  /** Forgets steps that end before `time`. */
  forget(time: number): void {
    while (
      this.first < this.count - 1 &&
      this.begin[this.first]! + this.length[this.first]! < time
    ) {
      this.first += 1;
    }
  }

  /** The state at time s into out[offset …]. Times after the end are extrapolated from the last step. */
  at(s: number, out: Float64Array, offset = 0): void {
    let low = this.first;
    if (this.count === low || s < this.begin[low]!) {
      for (let i = 0; i < this.n; i += 1) out[offset + i] = this.before[i]!;
      return;
    }
    let high = this.count - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.begin[middle]! <= s) low = middle;
      else high = middle - 1;
    }
    const theta = (s - this.begin[low]!) / this.length[low]!;
    quartic(this.pieces, this.n, theta, out, offset, low * 5 * this.n);
  }
}

/** y(θ) = c₀ + θ(c₁ + (1 − θ)(c₂ + θ(c₃ + (1 − θ)c₄))), coefficient k of variable i at c[base + k·n + i]. */
export function quartic(
  c: Float64Array,
  n: number,
  theta: number,
  out: Float64Array,
  offset = 0,
  base = 0,
): void {
  const rest = 1 - theta;
  for (let i = 0; i < n; i += 1) {
    const at = base + i;
    const inner = c[at + 3 * n]! + rest * c[at + 4 * n]!;
    out[offset + i] = c[at]! + theta * (c[at + n]! + rest * (c[at + 2 * n]! + theta * inner));
  }
}
