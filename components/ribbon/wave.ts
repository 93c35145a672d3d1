import type { Dimensions } from './dimensions';
import { scaleX } from './scale';
import type { Envelope, PredictedOnset, RibbonData } from './types';

/** A stretch of the control axis on which the steady state is unstable. */
export type Stretch = {
  from: number;
  to: number;
  /** onsets at its ends; null where the stretch runs out of the range */
  left: PredictedOnset | null;
  right: PredictedOnset | null;
};

/**
 * Unstable stretches of the range. Each onset opens or closes one, by its side; one that neither
 * closes nor is opened runs to the end of the range.
 */
export function unstableStretches(data: Pick<RibbonData, 'from' | 'to' | 'onsets'>): Stretch[] {
  const onsets = [...data.onsets].sort((a, b) => a.value - b.value);
  const stretches: Stretch[] = [];
  let open: { from: number; left: PredictedOnset | null } | null =
    onsets[0]?.oscillates === 'below' ? { from: data.from, left: null } : null;
  for (const onset of onsets) {
    if (onset.oscillates === 'above') {
      open ??= { from: onset.value, left: onset };
    } else if (open) {
      stretches.push({ ...open, to: onset.value, right: onset });
      open = null;
    }
  }
  if (open) stretches.push({ ...open, to: data.to, right: null });
  return stretches;
}

/** Share of the largest amplitude at the fold of an abrupt onset, where no amplitude is known. */
const FOLD_SHARE = 0.6;

/**
 * Schematic amplitude, 0 … 1, where the model's own is not at hand: gentle onsets follow the square
 * root law a ∝ √|v − onset|, abrupt ones a jump to FOLD_SHARE at the fold and a root beyond it.
 */
export function schematicAmplitude(value: number, stretch: Stretch): number {
  const { left, right } = stretch;
  const start = left?.coexistence?.from ?? stretch.from;
  const end = right?.coexistence?.to ?? stretch.to;
  if (value < start || value > end || !(end > start)) return 0;
  const rise = (distance: number, room: number, abrupt: boolean) => {
    const root = Math.sqrt(Math.max(0, Math.min(1, distance / room)));
    return abrupt ? FOLD_SHARE + (1 - FOLD_SHARE) * root : root;
  };
  const room = left && right ? (end - start) / 2 : end - start;
  const fromLeft = left ? rise(value - start, room, Boolean(left.coexistence)) : 1;
  const fromRight = right ? rise(end - value, room, Boolean(right.coexistence)) : 1;
  return Math.min(fromLeft, fromRight);
}

/** Linear interpolation in the envelope, as a share of its largest value; 0 outside it. */
export function envelopeAt(envelope: Envelope, value: number): number {
  const { control, value: a } = envelope;
  const top = Math.max(...a, 0);
  if (!(top > 0)) return 0;
  for (let i = 1; i < control.length; i++) {
    const [x0, x1] = [control[i - 1]!, control[i]!];
    if (value < Math.min(x0, x1) || value > Math.max(x0, x1)) continue;
    const share = x1 === x0 ? 0 : (value - x0) / (x1 - x0);
    return Math.max(0, (a[i - 1]! + share * (a[i]! - a[i - 1]!)) / top);
  }
  return 0;
}

const px = (n: number) => Math.round(n * 100) / 100;

export type WavePath = {
  /** SVG path of the line; coexistence is drawn behind */
  line: string;
  /** wave through coexistence windows, behind the steady line */
  behind: string[];
  /** closed envelopes c ± A·a */
  envelopes: string[];
};

/**
 * The line of the ribbon: flat at c where the steady state is stable, else
 * y = c − A·(a/a_max)·sin(2π(x − x_onset)/λ) with the wavelength fixed, stepped along x.
 */
export function wavePath(data: RibbonData, dim: Dimensions, width: number): WavePath {
  const x = scaleX(data.from, data.to, width, dim.pad);
  const value = (at: number) =>
    data.from + ((at - dim.pad) / (width - 2 * dim.pad)) * (data.to - data.from);
  const stretches = unstableStretches(data);
  const share = (v: number, s: Stretch) =>
    data.amplitude ? envelopeAt(data.amplitude, v) : schematicAmplitude(v, s);
  const height = (at: number, s: Stretch) => {
    const zero = x(s.left?.value ?? s.right?.value ?? data.from);
    const sine = Math.sin((2 * Math.PI * (at - zero)) / dim.wavelength);
    return dim.centre - dim.amplitude * share(value(at), s) * sine;
  };
  const walk = (from: number, to: number) => {
    const points: number[] = [from];
    for (let at = Math.ceil(from / dim.step) * dim.step; at < to; at += dim.step)
      if (at > from) points.push(at);
    if (to > from) points.push(to);
    return points;
  };
  const line = [`M${dim.pad} ${dim.centre}`];
  const behind: string[] = [];
  const envelopes: string[] = [];
  for (const s of stretches) {
    const [from, to] = [clamp(x(s.from)), clamp(x(s.to))];
    line.push(`L${px(from)} ${dim.centre}`);
    for (const at of walk(from, to)) line.push(`L${px(at)} ${px(height(at, s))}`);
    line.push(`${s.right ? `L${px(to)} ${dim.centre}` : ''}`);
    const windows = [s.left?.coexistence, s.right?.coexistence].filter((w) => w != null);
    for (const w of windows) {
      const points = walk(clamp(x(w.from)), clamp(x(w.to)));
      const head = points[0] === undefined ? '' : `M${px(points[0])} ${dim.centre}`;
      behind.push(head + points.map((at) => `L${px(at)} ${px(height(at, s))}`).join(''));
    }
    const wide = [s.from, s.to, ...windows.flatMap((w) => [w.from, w.to])].map((v) => clamp(x(v)));
    envelopes.push(outline(walk(Math.min(...wide), Math.max(...wide)), s));
  }
  const end = stretches.at(-1);
  if (!end || end.right) line.push(`L${px(width - dim.pad)} ${dim.centre}`);
  return { line: line.join(''), behind, envelopes };

  function clamp(at: number) {
    return Math.min(Math.max(at, dim.pad), width - dim.pad);
  }
  function outline(points: number[], s: Stretch) {
    const half = points.map((at) => dim.amplitude * share(value(at), s));
    const upper = points.map((at, i) => `${px(at)} ${px(dim.centre - half[i]!)}`);
    const lower = points.map((at, i) => `${px(at)} ${px(dim.centre + half[i]!)}`).reverse();
    return `M${[...upper, ...lower].join('L')}Z`;
  }
}
