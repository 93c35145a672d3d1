import { figure, NARROW_SPACE } from './numbers';

const part = (value: number, unit: string) => `${value}${NARROW_SPACE}${unit}`;

/**
 * Minutes in words a lab uses: "40 s", "3 h 20 min", "12 d 4 h". Two units at most, the smaller one
 * rounded; negative durations carry a minus sign.
 */
export function durationText(minutes: number): string {
  if (!Number.isFinite(minutes)) return '\u2013';
  if (minutes < 0) return `\u2212${durationText(-minutes)}`;
  if (minutes < 1) return part(Math.round(minutes * 60), 's');
  if (Math.round(minutes) < 60) {
    const whole = Math.floor(minutes);
    const seconds = Math.round((minutes - whole) * 60);
    if (minutes >= 10 || seconds === 0) return part(Math.round(minutes), 'min');
    return seconds === 60 ? part(whole + 1, 'min') : `${part(whole, 'min')} ${part(seconds, 's')}`;
  }
  if (Math.round(minutes) < 48 * 60) return pair(Math.round(minutes), 60, 'h', 'min');
  return pair(Math.round(minutes / 60), 24, 'd', 'h');
}

function pair(total: number, size: number, large: string, small: string): string {
  const rest = total % size;
  const whole = part(Math.floor(total / size), large);
  return rest === 0 ? whole : `${whole} ${part(rest, small)}`;
}

/** A quantity of model time in its own unit: "6.1 d". */
export function modelTimeText(value: number, timeUnit: string, significant = 3): string {
  return `${figure(value, significant)}${NARROW_SPACE}${timeUnit}`;
}

/** Seconds on the bench counter: "03:40", above an hour "1:03:40"; `over` once the moment is past. */
export function countdown(seconds: number): { text: string; over: boolean } {
  const over = seconds < 0;
  const total = over ? Math.floor(-seconds) : Math.ceil(seconds);
  const two = (n: number) => String(n).padStart(2, '0');
  const hours = Math.floor(total / 3600);
  const clock = `${two(Math.floor((total % 3600) / 60))}:${two(total % 60)}`;
  return { text: hours > 0 ? `${hours}:${clock}` : clock, over };
}
