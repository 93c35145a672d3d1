/**
 * Quantile of sorted values by linear interpolation between order statistics at (N − 1)·p
 * (Hyndman & Fan 1996, type 7). `sorted` must hold at least one value.
 */
export function quantile(sorted: readonly number[], p: number): number {
  const at = (sorted.length - 1) * p;
  const low = Math.floor(at);
  const high = Math.min(low + 1, sorted.length - 1);
  return sorted[low]! + (at - low) * (sorted[high]! - sorted[low]!);
}
