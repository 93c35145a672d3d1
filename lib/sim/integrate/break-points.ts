const MAX_POINTS = 4000;

/**
 * Times after `start` at which a derivative of order ≤ `order` + 1 jumps, because the history before `start` does not
 * join smoothly: start + Σ m_k τ_k with 1 ≤ Σ m_k ≤ order. Rising, without repeats. Many delays: lower orders only.
 */
export function breakPoints(delays: readonly number[], start: number, order: number): number[] {
  const positive = [...new Set(delays.filter((d) => d > 0))];
  let level = [0];
  const all = new Set<number>();
  for (let i = 0; i < order && positive.length > 0; i += 1) {
    const next = new Set<number>();
    for (const sum of level) for (const delay of positive) next.add(sum + delay);
    if (all.size + next.size > MAX_POINTS) break;
    for (const sum of next) all.add(sum);
    level = [...next];
  }
  const sorted = [...all].sort((a, b) => a - b);
  // Sums that differ by rounding alone count once: a step between them would vanish.
  const distinct = sorted.filter((sum, i) => i === 0 || sum - sorted[i - 1]! > 1e-12 * sum);
  return distinct.map((sum) => start + sum);
}
