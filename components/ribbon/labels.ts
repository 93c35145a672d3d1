import { decimalsFor, fineDecimalsFor, intervalText, unitText } from '@/lib/format';
import { type Dimensions, monoWidth } from './dimensions';
import { ticksOf, tickText } from './scale';
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

type Room = { taken: Box[]; dim: Dimensions; width: number };

function fits(text: Text, others: Box[], { dim, width }: Room): boolean {
  const box = boxOf(text, dim.font.label);
  const inside = box.from >= dim.pad - 0.5 && box.to <= width - dim.pad + 0.5;
  return inside && !others.some((other) => overlaps(box, other, 8));
}

/** Bound of the search below; a ribbon has a handful of pointers with a dozen candidates each. */
const MOST_TRIALS = 5000;

/**
 * One candidate for each pointer so that as many as possible are shown, none over another; earlier
 * candidates and earlier pointers are preferred.
 */
function settleAll(candidates: Text[][], room: Room): Text[] {
  let best: Text[] = [];
  let trials = 0;
  const search = (i: number, chosen: Text[], boxes: Box[]): boolean => {
    if (chosen.length > best.length) best = chosen;
    const options = candidates[i];
    if (!options) return best.length === candidates.length;
    for (const text of options) {
      if (++trials > MOST_TRIALS) return true;
      if (!fits(text, boxes, room)) continue;
      if (search(i + 1, [...chosen, text], [...boxes, boxOf(text, room.dim.font.label)]))
        return true;
    }
    return search(i + 1, chosen, boxes);
  };
  search(0, [], room.taken);
  return best;
}

/** Half the width of a predicted pointer on the page, px. */
const POINTER = 5.4;

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
  const pointers = data.onsets.map((onset) => x(onset.value));
  const taken = pointers.map((at) => ({ from: at - POINTER + 6, to: at + POINTER - 6 }));
  const candidates = data.onsets.map((onset, i) => {
    const figures = predictedFigures(onset, 'page');
    const named = `${i === 0 ? 'predicted ' : ''}${figures} ${unit}`.trim();
    const full = i === 0 ? named + stale : named;
    const at = x(onset.value);
    const brief = figures.split(' ')[0] ?? figures;
    return [full, figures, brief].flatMap((text): Text[] => [
      { text, x: at + 10.5, y, anchor: 'start', kind: 'predicted' },
      { text, x: at - 10.5, y, anchor: 'end', kind: 'predicted' },
    ]);
  });
  return settleAll(candidates, { taken, dim, width });
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
  const observed = data.observed.map((onset, i) => {
    const figures = observedFigures(onset);
    const full = size === 'page' ? `${figures} ${unit}` : figures;
    const named = size === 'page' && i === 0 ? [`observed ${full}`] : [];
    const brief = figures.split(' ')[0] ?? figures;
    const at = x(onset.value);
    return [...named, full, figures, brief].flatMap((text) =>
      size === 'page'
        ? [beneath(text, at, dim, width), ...aside(text, at, dim)]
        : beside(text, at, dim),
    );
  });
  if (size !== 'card') return settleAll(observed, { taken: [], dim, width });
  const predicted = data.onsets.map((onset, i) => {
    const figures = predictedFigures(onset, size);
    const stale = data.stale && i === 0 ? [`${figures}, from ${data.stale}`] : [];
    const brief = figures.split(' ')[0] ?? figures;
    return [...stale, figures, brief].map((text) => ({
      ...beneath(text, x(onset.value), dim, width),
      kind: 'predicted' as const,
    }));
  });
  return settleAll([...observed, ...predicted], { taken: [], dim, width });
}

/** Beneath a pointer, but reaching to one side of it, where another label needs the other. */
function aside(text: string, at: number, dim: Dimensions): Text[] {
  const common = { text, y: dim.lowerText ?? 0, kind: 'observed' as const };
  return [
    { ...common, x: at + 4, anchor: 'end' },
    { ...common, x: at - 4, anchor: 'start' },
  ];
}

function numerals(data: RibbonData, dim: Dimensions, width: number, size: RibbonSize): Text[] {
  const y = dim.lowerText ?? 0;
  const ticks = ticksOf(data.from, data.to, width, dim.pad);
  const end = (v: number) => tickText(v, Math.max(0, decimalsFor((data.to - data.from) / 50)));
  const unit = unitText(data.unit);
  const texts: Text[] = [
    { text: end(data.from), x: dim.pad, y, anchor: 'start', kind: 'numeral' },
    {
      text: `${end(data.to)} ${unit}`.trim(),
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
