/** A stretch of time; ISO 8601 instants in UTC, as `Date.toISOString` writes them. */
export type OpenSpan = { from: string; to: string };

/** Whether anybody works at that instant. */
export function isOpen(at: Date, open: readonly OpenSpan[]): boolean {
  const time = at.getTime();
  return open.some((o) => Date.parse(o.from) <= time && time < Date.parse(o.to));
}

/** The open stretches without the lab's closures; a closure may cut a stretch in two. */
export function withoutClosures(
  open: readonly OpenSpan[],
  closures: readonly OpenSpan[],
): OpenSpan[] {
  return closures.reduce<OpenSpan[]>(
    (left, c) =>
      left.flatMap((o) => {
        if (c.to <= o.from || c.from >= o.to) return [o];
        const parts: OpenSpan[] = [];
        if (c.from > o.from) parts.push({ from: o.from, to: c.from });
        if (c.to < o.to) parts.push({ from: c.to, to: o.to });
        return parts;
      }),
    [...open],
  );
}

/** Shorter sessions are drawn as long as this, so that a line of text fits. */
const SHORTEST_MS = 15 * 60_000;

/** Where a block of the calendar ends on the page, never less than a line of text tall. */
export function drawnEnd(from: Date, to: Date): Date {
  return new Date(Math.max(to.getTime(), from.getTime() + SHORTEST_MS));
}
