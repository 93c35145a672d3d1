import { decimalsFor, fineDecimalsFor, fixed, intervalText, unitText } from '@/lib/format';
import { type Dimensions, monoWidth } from './dimensions';
import { ticksOf } from './scale';
import type { ObservedOnset, PredictedOnset, RibbonData, RibbonSize } from './types';

export type Text = {
  text: string;
  x: number;
  y: number;
  anchor: 'start' | 'middle' | 'end';
  kind: 'predicted' | 'observed' | 'numeral' | 'note';
};

/** Clear space between a label and the numerals that stay beside it, px. */
const NUMERAL_GAP = 12;

type Box = { from: number; to: number };

function boxOf(text: Text, size: number): Box {
  const w = monoWidth(text.text, size);
  if (text.anchor === 'start') return { from: text.x, to: text.x + w };
  if (text.anchor === 'end') return { from: text.x - w, to: text.x };
  return { from: text.x - w / 2, to: text.x + w / 2 };
}
const overlaps = (a: Box, b: Box, gap: number) => a.from < b.to + gap && b.from < a.to + gap;

/** Figures of a predicted onset: on the page one digit finer, as a vernier is read. */
export function predictedFigures(onset: PredictedOnset, size: RibbonSize): string {
  if (onset.label) return onset.label;
  const half = (onset.high - onset.low) / 2;
  const decimals =
    size === 'page' ? Math.max(0, fineDecimalsFor(half)) : Math.max(0, decimalsFor(half));
  return intervalText(onset, { decimals });
}

export function observedFigures(onset: ObservedOnset): string {
  if (onset.label) return onset.label;
  const half = (onset.high - onset.low) / 2;
  return intervalText(onset, { decimals: Math.max(0, decimalsFor(half)) });
}

/** Takes the first candidate that lies within the ribbon and clear of the texts already set. */
function settle(candidates: Text[], taken: Box[], dim: Dimensions, width: number): Text | null {
  for (const text of candidates) {
    const box = boxOf(text, dim.font.label);
    const inside = box.from >= dim.pad - 0.5 && box.to <= width - dim.pad + 0.5;
    if (inside && !taken.some((other) => overlaps(box, other, 8))) {
      taken.push(box);
      return text;
    }
  }
  return null;
}

function predictedBeside(
  data: RibbonData,
  x: (v: number) => number,
  dim: Dimensions,
  width: number,
): Text[] {
  if (dim.upperText === null) return [];
  const y = dim.upperText;
  const unit = unitText(data.unit);
  const stale = data.stale ? `, from ${data.stale}` : '';
  const taken: Box[] = [];
  return data.onsets.flatMap((onset, i) => {
    const figures = predictedFigures(onset, 'page');
    const full = `${i === 0 ? 'predicted ' : ''}${figures} ${unit}${i === 0 ? stale : ''}`.trim();
    const at = x(onset.value);
    const brief = figures.split(' ')[0] ?? figures;
    const candidates = [full, figures, brief].flatMap((text): Text[] => [
      { text, x: at + 10.5, y, anchor: 'start', kind: 'predicted' },
      { text, x: at - 10.5, y, anchor: 'end', kind: 'predicted' },
    ]);
    return settle(candidates, taken, dim, width) ?? [];
  });
}

/** Text centred under a pointer, moved sideways where it would leave the ribbon. */
function beneath(text: string, at: number, dim: Dimensions, width: number): Text {
  const half = monoWidth(text, dim.font.label) / 2;
  const room = width - 2 * dim.pad;
  const centre =
    2 * half > room ? width / 2 : Math.min(Math.max(at, dim.pad + half), width - dim.pad - half);
  return { text, x: centre, y: dim.lowerText ?? 0, anchor: 'middle', kind: 'observed' };
}

/** On the card a triangle and its figures share one line: right of it, else left. */
function beside(text: string, at: number, dim: Dimensions): Text[] {
  const common = { text, y: dim.lowerText ?? 0, kind: 'observed' as const };
  return [
    { ...common, x: at + 8, anchor: 'start' },
    { ...common, x: at - 8, anchor: 'end' },
  ];
}

function underPointers(
  data: RibbonData,
  x: (v: number) => number,
  dim: Dimensions,
  width: number,
  size: RibbonSize,
): Text[] {
  const unit = unitText(data.unit);
  const taken: Box[] = [];
  const texts = data.observed.flatMap((onset, i) => {
    const figures = observedFigures(onset);
    const full = size === 'page' ? `${figures} ${unit}` : figures;
    const named = size === 'page' && i === 0 ? [`observed ${full}`] : [];
    const brief = figures.split(' ')[0] ?? figures;
    const texts = [...named, full, figures, brief];
    const candidates = texts.flatMap((text) =>
      size === 'page'
        ? beneath(text, x(onset.value), dim, width)
        : beside(text, x(onset.value), dim),
    );
    return settle(candidates, taken, dim, width) ?? [];
  });
  if (size !== 'card') return texts;
  const predicted = data.onsets.flatMap((onset, i) => {
    const figures = predictedFigures(onset, size);
    const stale = data.stale && i === 0 ? [`${figures}, from ${data.stale}`] : [];
    const brief = figures.split(' ')[0] ?? figures;
    const candidates = [...stale, figures, brief].map((text) => ({
      ...beneath(text, x(onset.value), dim, width),
      kind: 'predicted' as const,
    }));
    return settle(candidates, taken, dim, width) ?? [];
  });
  return [...texts, ...predicted];
}

function numerals(data: RibbonData, dim: Dimensions, width: number, size: RibbonSize): Text[] {
  const y = dim.lowerText ?? 0;
  const ticks = ticksOf(data.from, data.to, width, dim.pad);
  const step = (data.to - data.from) / 100;
  const end = (v: number) => (v === 0 ? '0' : fixed(v, Math.max(0, decimalsFor(step * 2))));
  const tidy = (text: string) => (text.includes('.') ? text.replace(/\.?0+$/, '') : text);
  const unit = unitText(data.unit);
  const texts: Text[] = [
    { text: tidy(end(data.from)), x: dim.pad, y, anchor: 'start', kind: 'numeral' },
    {
      text: `${tidy(end(data.to))} ${unit}`.trim(),
      x: width - dim.pad,
      y,
      anchor: 'end',
      kind: 'numeral',
    },
  ];
  if (size !== 'page') return texts;
  const boxes = texts.map((t) => boxOf(t, dim.font.numeral));
  const inner = ticks
    .filter((t) => t.major)
    .map((t): Text => ({ text: t.text, x: t.x, y, anchor: 'middle', kind: 'numeral' }))
    .filter((t) => !boxes.some((b) => overlaps(boxOf(t, dim.font.numeral), b, 10)));
  return [...texts, ...inner];
}

/**
 * All texts of a ribbon: predicted beside their triangles (page) or beneath (card), observed beneath,
 * numerals where no label lies over them.
 */
export function ribbonTexts(
  data: RibbonData,
  x: (v: number) => number,
  dim: Dimensions,
  width: number,
  size: RibbonSize,
  withLabels: boolean,
): Text[] {
  if (size === 'list' || dim.lowerText === null) return [];
  const upper = withLabels ? predictedBeside(data, x, dim, width) : [];
  const lower = withLabels ? underPointers(data, x, dim, width, size) : [];
  if (data.onsets.length === 0 && withLabels) {
    const text = data.noOnset ?? 'no onset predicted in this range';
    const at = { x: width / 2, anchor: 'middle' as const, kind: 'note' as const };
    if (dim.upperText !== null) upper.push({ ...at, text, y: dim.upperText });
    else if (lower.length === 0) lower.push({ ...at, text, y: dim.lowerText });
  }
  const covered = lower.map((t) => boxOf(t, dim.font.label));
  const clear = (t: Text, gap: number) =>
    !covered.some((b) => overlaps(boxOf(t, dim.font.numeral), b, gap));
  const scale = numerals(data, dim, width, size).flatMap((t) => {
    if (clear(t, NUMERAL_GAP)) return t;
    // The unit stays wherever it fits, even where the end's numeral has to go.
    const unit = { ...t, text: unitText(data.unit) };
    return t.anchor === 'end' && unit.text !== '' && clear(unit, 4) ? unit : [];
  });
  return [...scale, ...upper, ...lower];
}
