/** Extent of one letter of the 13 px face, px; an average, generous by a tenth. */
const LETTER = 6.8;
const LINE = 15;

export type Box = { left: number; right: number; top: number; bottom: number };
export type Point = { x: number; y: number; label?: string };
export type PlacedName = { x: number; y: number; end: boolean } | null;

const overlap = (a: Box, b: Box) =>
  a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;

function boxOf(text: string, x: number, y: number, end: boolean): Box {
  const width = text.length * LETTER;
  return {
    left: end ? x - width : x,
    right: end ? x : x + width,
    top: y - LINE + 3,
    bottom: y + 4,
  };
}

/**
 * Where the name of each mark is written: beside it, right or left, a little lower or higher, clear
 * of the other marks, of the names already written and of the chart's ends; null where none fits.
 */
export function placeNames(points: readonly Point[], width: number, height: number): PlacedName[] {
  const marks = points.map(
    (p): Box => ({
      left: p.x - 8,
      right: p.x + 8,
      top: p.y - 8,
      bottom: p.y + 8,
    }),
  );
  const written: Box[] = [];
  return points.map((point) => {
    if (!point.label) return null;
    for (const dy of [-1, 21, -17]) {
      for (const end of [false, true]) {
        const at = { x: point.x + (end ? -15 : 15), y: point.y + dy, end };
        const box = boxOf(point.label, at.x, at.y, end);
        const inside =
          box.left >= 16 && box.right <= width - 8 && box.top >= 0 && box.bottom <= height;
        if (inside && ![...marks, ...written].some((other) => overlap(box, other))) {
          written.push(box);
          return at;
        }
      }
    }
    return null;
  });
}

/** Heights over the baseline at which the name of a curve is tried, px; the first that is free is taken. */
const CURVE_HEIGHTS = [82, 52, 112, 24, 142, 172];
const CURVE_STEP = 12;
const CLEAR = 6;

/** Places along a line from point to point, no farther than 4 px apart. */
function along(points: readonly { x: number; y: number }[]): { x: number; y: number }[] {
  return points.flatMap((b, i) => {
    const a = points[i - 1] ?? b;
    const parts = Math.max(1, Math.ceil(Math.hypot(b.x - a.x, b.y - a.y) / 4));
    return Array.from({ length: parts }, (_, k) => ({
      x: a.x + ((b.x - a.x) * (k + 1)) / parts,
      y: a.y + ((b.y - a.y) * (k + 1)) / parts,
    }));
  });
}

/** Whether a text written at a place would lie over a drawn line or come too close to what is there. */
function free(
  box: Box,
  drawn: readonly { x: number; y: number }[],
  taken: readonly Box[],
): boolean {
  const wide = {
    left: box.left - CLEAR,
    right: box.right + CLEAR,
    top: box.top - CLEAR,
    bottom: box.bottom + CLEAR,
  };
  if (box.top < 0 || taken.some((other) => overlap(wide, other))) return false;
  return !drawn.some(
    (p) => p.x > wide.left && p.x < wide.right && p.y > wide.top && p.y < wide.bottom,
  );
}

/** The right end of a text at one height, as far to the right as curve and `taken` allow; null without room. */
export function placeAtRight(
  text: string,
  y: number,
  curve: readonly { x: number; y: number }[],
  taken: readonly Box[],
  right: number,
): number | null {
  const drawn = along(curve);
  for (let x = right; x - text.length * LETTER > 16; x -= CURVE_STEP) {
    if (free(boxOf(text, x, y, true), drawn, taken)) return x;
  }
  return null;
}

/**
 * Where the name of a curve is written: as near as may be to the right of `from`, clear of the curve
 * and of `taken`; null where there is no room.
 */
export function placeCurveName(
  text: string,
  curve: readonly { x: number; y: number }[],
  taken: readonly Box[],
  chart: { from: number; width: number; base: number },
): { x: number; y: number } | null {
  const drawn = along(curve);
  const last = chart.width - 16 - text.length * LETTER;
  for (let x = chart.from; x <= last; x += CURVE_STEP) {
    for (const height of CURVE_HEIGHTS) {
      const box = boxOf(text, x, chart.base - height, false);
      if (free(box, drawn, taken)) return { x, y: chart.base - height };
    }
  }
  return null;
}
