import { niceStep, tickText } from '@/components/ribbon/scale';
import { decimalsOfStep, unitText } from '@/lib/format';

export type AxisTick = { value: number; text: string };
export type Axis = { domain: [number, number]; ticks: AxisTick[] };

/** "dilution rate, /d"; the name alone where the parameter has no unit. */
export const axisName = (label: string, unit: string): string =>
  [label, unitText(unit)].filter(Boolean).join(', ');

/** Axis from zero: about four steps of 1, 2 or 5 that reach the largest value, with room above. */
export function axisFromZero(largest: number, steps = 4): Axis {
  const top = largest > 0 && Number.isFinite(largest) ? largest : 1;
  const step = niceStep(top / steps);
  const count = Math.ceil(top / step - 1e-9);
  const ticks = Array.from({ length: count }, (_, i) => tick((i + 1) * step, step));
  return { domain: [0, count * step * 1.19], ticks };
}

/** Axis that holds all values and, if asked, zero; a twelfth of the span is free at both ends. Three to eight ticks. */
export function axisOver(values: readonly number[], withZero: boolean, steps = 8): Axis {
  const finite = values.filter(Number.isFinite);
  if (withZero) finite.push(0);
  let low = finite.length > 0 ? Math.min(...finite) : 0;
  let high = finite.length > 0 ? Math.max(...finite) : 1;
  if (!(high > low)) {
    const room = Math.abs(high) * 0.1 || 1;
    low -= room;
    high += room;
  }
  const room = (high - low) / 12;
  const domain: [number, number] = [low - room, high + room];
  const step = niceStep((domain[1] - domain[0]) / steps);
  const first = Math.ceil(domain[0] / step);
  const last = Math.floor(domain[1] / step);
  const ticks = Array.from({ length: Math.max(0, last - first + 1) }, (_, i) =>
    tick((first + i) * step, step),
  );
  return { domain, ticks };
}

function tick(value: number, step: number): AxisTick {
  const clean = Math.abs(value) < step * 1e-9 ? 0 : value;
  return { value: clean, text: tickText(clean, decimalsOfStep(step)) };
}

/** Moves marks at one place apart: the shift of the i-th of n, px. */
export const dodge = (i: number, n: number, pitch = 8): number => (i - (n - 1) / 2) * pitch;

/** A curve cut where stability changes; neighbouring pieces share their end so that no gap shows. */
export function piecesByStability(
  x: readonly number[],
  y: readonly (number | null)[],
  stable: readonly boolean[] | undefined,
): { stable: boolean; points: { x: number; y: number }[] }[] {
  const pieces: { stable: boolean; points: { x: number; y: number }[] }[] = [];
  let last: { x: number; y: number } | null = null;
  let lastStable: boolean | null = null;
  x.forEach((at, i) => {
    const value = y[i];
    if (value == null || !Number.isFinite(value) || !Number.isFinite(at)) {
      last = null;
      lastStable = null;
      return;
    }
    const now = stable?.[i] ?? true;
    const point = { x: at, y: value };
    if (now !== lastStable) pieces.push({ stable: now, points: last ? [last] : [] });
    pieces.at(-1)!.points.push(point);
    last = point;
    lastStable = now;
  });
  return pieces;
}
