/**
 * The pair of Dormand & Prince 1980 (J Comput Appl Math 6:19), orders 5(4), with the continuous extension of order 4 of
 * Hairer, Nørsett & Wanner 1993, II.6. Loops are written out because they are the engine's innermost work.
 */
export const NODES = [0, 1 / 5, 3 / 10, 4 / 5, 8 / 9, 1, 1] as const;

type Slopes = readonly [
  Float64Array,
  Float64Array,
  Float64Array,
  Float64Array,
  Float64Array,
  Float64Array,
  Float64Array,
];

export type { Slopes };

/** The state at which slope `s` (1 to 6) is taken, from the slopes before it. */
export function stageState(
  s: number,
  x: Float64Array,
  h: number,
  [k0, k1, k2, k3, k4, k5]: Slopes,
  out: Float64Array,
): void {
  const n = x.length;
  for (let i = 0; i < n; i += 1) {
    const a = k0[i]!;
    let sum = 0;
    if (s === 1) sum = a / 5;
    else if (s === 2) sum = (3 / 40) * a + (9 / 40) * k1[i]!;
    else if (s === 3) sum = (44 / 45) * a - (56 / 15) * k1[i]! + (32 / 9) * k2[i]!;
    else if (s === 4) {
      sum =
        (19372 / 6561) * a -
        (25360 / 2187) * k1[i]! +
        (64448 / 6561) * k2[i]! -
        (212 / 729) * k3[i]!;
    } else if (s === 5) {
      sum =
        (9017 / 3168) * a -
        (355 / 33) * k1[i]! +
        (46732 / 5247) * k2[i]! +
        (49 / 176) * k3[i]! -
        (5103 / 18656) * k4[i]!;
    } else {
      sum =
        (35 / 384) * a +
        (500 / 1113) * k2[i]! +
        (125 / 192) * k3[i]! -
        (2187 / 6784) * k4[i]! +
        (11 / 84) * k5[i]!;
    }
    out[i] = x[i]! + h * sum;
  }
}

/** Order 5 minus order 4 of variable i, per unit step. */
export function stepError(i: number, [k0, , k2, k3, k4, k5, k6]: Slopes): number {
  return (
    (71 / 57600) * k0[i]! -
    (71 / 16695) * k2[i]! +
    (71 / 1920) * k3[i]! -
    (17253 / 339200) * k4[i]! +
    (22 / 525) * k5[i]! -
    k6[i]! / 40
  );
}

/** Coefficients (see `quartic`) of the continuous extension of the step from x to `next`. */
export function extension(
  x: Float64Array,
  next: Float64Array,
  h: number,
  [k0, , k2, k3, k4, k5, k6]: Slopes,
  c: Float64Array,
): void {
  const n = x.length;
  for (let i = 0; i < n; i += 1) {
    const rise = next[i]! - x[i]!;
    const bend = h * k0[i]! - rise;
    c[i] = x[i]!;
    c[n + i] = rise;
    c[2 * n + i] = bend;
    c[3 * n + i] = rise - h * k6[i]! - bend;
    c[4 * n + i] =
      h *
      ((-12715105075 / 11282082432) * k0[i]! +
        (87487479700 / 32700410799) * k2[i]! -
        (10690763975 / 1880347072) * k3[i]! +
        (701980252875 / 199316789632) * k4[i]! -
        (1453857185 / 822651844) * k5[i]! +
        (69997945 / 29380423) * k6[i]!);
  }
}
