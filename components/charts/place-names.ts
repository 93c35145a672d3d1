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
