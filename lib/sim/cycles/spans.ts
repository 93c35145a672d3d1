import type { Branch } from '@/lib/contracts/predict';

/** A range of the control in which the steady state is unstable and oscillations are sought. */
export interface OscillatingSpan {
  readonly from: number;
  readonly to: number;
  /** Whether each end is an onset, rather than the end of what was asked for. */
  readonly onsetAtFrom: boolean;
  readonly onsetAtTo: boolean;
  /** The period to expect at a control value: that of the nearest onset, moved along with the branch. */
  periodAt(control: number): number;
}

interface Place {
  readonly value: number;
  readonly period: number;
  readonly oscillates: 'above' | 'below';
}

/** The ranges between onsets in which the steady state is unstable, by rising control. */
export function oscillatingSpans(branch: Branch, onsets: readonly Place[]): OscillatingSpan[] {
  if (onsets.length === 0 || branch.control.length === 0) return [];
  const lowest = branch.control.reduce((a, b) => Math.min(a, b));
  const highest = branch.control.reduce((a, b) => Math.max(a, b));
  const sorted = [...onsets].sort((a, b) => a.value - b.value);
  const spans: OscillatingSpan[] = [];
  const add = (lower: Place | null, upper: Place | null) => {
    const from = lower?.value ?? lowest;
    const to = upper?.value ?? highest;
    if (!(from < to)) return;
    const known = [lower, upper].filter((place) => place !== null);
    spans.push({
      from,
      to,
      onsetAtFrom: lower !== null,
      onsetAtTo: upper !== null,
      periodAt: (control) => periodNear(branch, known, control),
    });
  };
  let open: Place | null = null;
  for (const onset of sorted) {
    if (onset.oscillates === 'above') {
      if (open) add(open, { ...onset, oscillates: 'below' });
      open = onset;
    } else {
      add(open, onset);
      open = null;
    }
  }
  if (open) add(open, null);
  return spans;
}

/** 2π over the branch's frequency at the nearest point where it is not 0, at most four times an onset's period. */
function periodNear(branch: Branch, onsets: readonly Place[], control: number): number {
  const onset = onsets.reduce((a, b) =>
    Math.abs(b.value - control) < Math.abs(a.value - control) ? b : a,
  );
  let best = -1;
  branch.control.forEach((value, i) => {
    if (!(branch.frequency[i]! > 0)) return;
    const distance = Math.abs(value - control);
    if (best < 0 || distance < Math.abs(branch.control[best]! - control)) best = i;
  });
  if (best < 0) return onset.period;
  const period = (2 * Math.PI) / branch.frequency[best]!;
  return Math.min(Math.max(period, onset.period / 4), 4 * onset.period);
}

/** `count` control values inside a span, spaced so that equal steps are equal steps of √distance near each onset. */
export function spacedControls(span: OscillatingSpan, count: number): number[] {
  const width = span.to - span.from;
  return Array.from({ length: count }, (_, i) => {
    const both = span.onsetAtFrom && span.onsetAtTo;
    const u = both ? (i + 1) / (count + 1) : (i + 1) / count;
    if (both) return span.from + (width * (1 - Math.cos(Math.PI * u))) / 2;
    if (span.onsetAtFrom) return span.from + width * u * u;
    const v = i / count;
    return span.to - width * (1 - v) * (1 - v);
  });
}
