import type { PredictedOnset } from './types';

/** Quantile at a fractional place of an ascending list, by linear interpolation. */
export function quantileAt(quantiles: readonly number[], place: number): number {
  const at = Math.min(Math.max(place, 0), quantiles.length - 1);
  const low = Math.floor(at);
  const high = Math.min(low + 1, quantiles.length - 1);
  return quantiles[low]! + (at - low) * (quantiles[high]! - quantiles[low]!);
}

/** Values of the comb's lines: all quantiles, or `count` evenly chosen from the first to the last. */
export function combValues(onset: PredictedOnset, count: number | 'all'): number[] {
  const quantiles = onset.quantiles ?? [];
  if (quantiles.length === 0) return [];
  if (count === 'all' || quantiles.length <= count) return [...quantiles];
  const step = (quantiles.length - 1) / (count - 1);
  return Array.from({ length: count }, (_, i) => quantileAt(quantiles, i * step));
}

/** Ink opacity of the band at low, halfway, onset, halfway, high, with the place of each stop. */
export function bandStops(
  onset: PredictedOnset,
): { place: string; value: number; opacity: number }[] {
  const { low, value, high } = onset;
  return [
    { place: 'low', value: low, opacity: 0 },
    { place: 'rising', value: (low + value) / 2, opacity: 0.09 },
    { place: 'onset', value, opacity: 0.2 },
    { place: 'falling', value: (value + high) / 2, opacity: 0.09 },
    { place: 'high', value: high, opacity: 0 },
  ];
}

/** Colours of the line along the scale: it turns from steady to sustained from low to high. */
export function lineStops(
  onsets: readonly PredictedOnset[],
): { key: string; value: number; token: 'steady' | 'sustained' }[] {
  return [...onsets]
    .sort((a, b) => a.value - b.value)
    .flatMap((onset, i) => {
      const rising = onset.oscillates === 'above';
      return [
        {
          key: `low ${i}`,
          value: onset.low,
          token: rising ? ('steady' as const) : ('sustained' as const),
        },
        {
          key: `high ${i}`,
          value: onset.high,
          token: rising ? ('sustained' as const) : ('steady' as const),
        },
      ];
    });
}
