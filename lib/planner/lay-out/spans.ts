/** A stretch of time, from included, to excluded, ms. */
export type Span = { from: number; to: number };

/** Sorted, disjoint, with touching spans joined; empty ones dropped. */
export function mergeSpans(spans: readonly Span[]): Span[] {
  const sorted = spans.filter((s) => s.to > s.from).sort((a, b) => a.from - b.from);
  const out: Span[] = [];
  for (const s of sorted) {
    const last = out[out.length - 1];
    if (last && s.from <= last.to) last.to = Math.max(last.to, s.to);
    else out.push({ from: s.from, to: s.to });
  }
  return out;
}

/** What of `base` is left once `taken` is cut out. */
export function subtractSpans(base: readonly Span[], taken: readonly Span[]): Span[] {
  const cuts = mergeSpans(taken);
  const out: Span[] = [];
  for (const span of mergeSpans(base)) {
    let from = span.from;
    for (const cut of cuts) {
      if (cut.to <= from) continue;
      if (cut.from >= span.to) break;
      if (cut.from > from) out.push({ from, to: cut.from });
      from = Math.max(from, cut.to);
    }
    if (from < span.to) out.push({ from, to: span.to });
  }
  return out;
}

export function clipSpans(spans: readonly Span[], from: number, to: number): Span[] {
  return mergeSpans(spans.map((s) => ({ from: Math.max(s.from, from), to: Math.min(s.to, to) })));
}

/** Index of the last span that begins at or before `t`; −1 when there is none. */
export function spanIndex(spans: readonly Span[], t: number): number {
  let low = 0;
  let high = spans.length;
  while (low < high) {
    const mid = (low + high) >> 1;
    if (spans[mid]!.from <= t) low = mid + 1;
    else high = mid;
  }
  return low - 1;
}

/** The earliest s ≥ t at which [s, s + duration) lies inside one of the (merged) spans. */
export function nextInside(spans: readonly Span[], t: number, duration: number): number {
  let i = spanIndex(spans, t);
  if (i >= 0 && t + duration <= spans[i]!.to) return t;
  for (i++; i < spans.length; i++) {
    const span = spans[i]!;
    if (span.to - span.from >= duration) return span.from;
  }
  return Number.POSITIVE_INFINITY;
}
