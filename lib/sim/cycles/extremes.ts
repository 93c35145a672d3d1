/**
 * Lowest and highest values of several quantities sampled at rising times. A sample that lies beyond both its
 * neighbours is replaced by the vertex of the parabola through the three, so that the extremes are those of the
 * course and not of its samples.
 */
export class Extremes {
  readonly low: Float64Array;
  readonly high: Float64Array;
  private readonly one: Float64Array;
  private readonly two: Float64Array;
  private readonly times = [0, 0];
  private count = 0;

  constructor(readonly size: number) {
    this.low = new Float64Array(size);
    this.high = new Float64Array(size);
    this.one = new Float64Array(size);
    this.two = new Float64Array(size);
    this.forget();
  }

  /** Starts anew; the last samples are kept for the parabola. */
  forget(): void {
    this.low.fill(Number.POSITIVE_INFINITY);
    this.high.fill(Number.NEGATIVE_INFINITY);
  }

  swing(): Float64Array {
    return this.high.map((high, i) => high - this.low[i]!);
  }

  add(time: number, values: Float64Array): void {
    const before = this.times[1]! - this.times[0]!;
    const after = time - this.times[1]!;
    for (let i = 0; i < this.size; i += 1) {
      const y = values[i]!;
      if (y < this.low[i]!) this.low[i] = y;
      if (y > this.high[i]!) this.high[i] = y;
      const middle = this.two[i]!;
      if (this.count < 2 || (middle - this.one[i]!) * (y - middle) >= 0) continue;
      const rise = (middle - this.one[i]!) / before;
      const bend = ((y - middle) / after - rise) / (before + after);
      const slope = rise + bend * before;
      const vertex = middle - (slope * slope) / (4 * bend);
      if (vertex < this.low[i]!) this.low[i] = vertex;
      if (vertex > this.high[i]!) this.high[i] = vertex;
    }
    this.one.set(this.two);
    for (let i = 0; i < this.size; i += 1) this.two[i] = values[i]!;
    this.times[0] = this.times[1]!;
    this.times[1] = time;
    this.count += 1;
  }
}
