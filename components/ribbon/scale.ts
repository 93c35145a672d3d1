import { decimalsOfStep, figure, fixed } from '@/lib/format';

/** Position along the ribbon, px: pad + (v − from)/(to − from)·(width − 2·pad). */
export function scaleX(
  from: number,
  to: number,
  width: number,
  pad: number,
): (value: number) => number {
  const span = to - from;
  if (!(span > 0)) return () => width / 2;
  return (value) => pad + ((value - from) / span) * (width - 2 * pad);
}

export type Tick = { value: number; x: number; major: boolean; text: string };

/** The smallest of 1, 2, 5 × 10ⁿ not below `least`. */
export function niceStep(least: number): number {
  const power = 10 ** Math.floor(Math.log10(least));
  for (const m of [1, 2, 5, 10]) if (m * power >= least * (1 - 1e-9)) return m * power;
  return 10 * power;
}

/** A numeral of a scale, without trailing zeros: "0.8", "1", "1.2". */
export function tickText(value: number, decimals: number): string {
  if (value === 0) return '0';
  if (decimals > 4 || Math.abs(value) >= 1e6) return figure(value, 4);
  const text = fixed(value, decimals);
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text;
}

const MINORS: Record<number, number> = { 1: 5, 2: 4, 5: 5 };

/** Most ticks that one scale may carry; a wider one would be a smear. */
const MOST_TICKS = 400;

/**
 * Ticks of a scale from `from` to `to`: major ones at multiples of 1, 2 or 5 at least `majorPx`
 * apart, minor ones dividing them in four or five; the ends are not ticks unless they fall on one.
 */
export function ticksOf(
  from: number,
  to: number,
  width: number,
  pad: number,
  majorPx = 110,
): Tick[] {
  const span = to - from;
  const room = width - 2 * pad;
  if (!(span > 0) || !(room > 0)) return [];
  const major = niceStep((span * Math.min(majorPx, room)) / room);
  const lead = Math.round(major / 10 ** Math.floor(Math.log10(major) + 1e-9));
  const parts = MINORS[lead] ?? 5;
  const minor = major / parts;
  const decimals = decimalsOfStep(major);
  const x = scaleX(from, to, width, pad);
  const first = Math.ceil(from / minor - 1e-9);
  const last = Math.min(Math.floor(to / minor + 1e-9), first + MOST_TICKS);
  const ticks: Tick[] = [];
  for (let i = first; i <= last; i++) {
    const value = i * minor;
    ticks.push({
      value,
      x: x(value),
      major: i % parts === 0,
      text: tickText(value, decimals),
    });
  }
  return ticks;
}
