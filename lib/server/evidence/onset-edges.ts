import type { Verdict } from '@/lib/contracts';

type Seen = { control: number; verdict: Verdict | null };
type Level = { control: number; shows: 'steady' | 'sustained' | 'both' };

/** Levels with a decided verdict, ascending; what all preparations of a level show, or both. */
function decidedLevels(runs: readonly Seen[]): Level[] {
  const levels: Level[] = [];
  const decided = runs.filter((r) => r.verdict !== null && r.verdict !== 'undecided');
  for (const { control, verdict } of [...decided].sort((a, b) => a.control - b.control)) {
    const shows = verdict === 'sustained' ? 'sustained' : 'steady';
    const last = levels.at(-1);
    if (last?.control === control) last.shows = last.shows === shows ? shows : 'both';
    else levels.push({ control, shows });
  }
  return levels;
}

/**
 * The last level at which every preparation was steady and the first at which every one oscillated,
 * on either side of an onset; null where the verdicts change in no such way on that side.
 */
export function edgesOf(
  runs: readonly Seen[],
  onset: { oscillates: 'above' | 'below'; onset: { value: number } },
): { steadyAt: number; sustainedAt: number } | null {
  const levels = decidedLevels(runs);
  const [first, second] =
    onset.oscillates === 'above'
      ? (['steady', 'sustained'] as const)
      : (['sustained', 'steady'] as const);
  const changes = levels.flatMap((level, i) => {
    if (level.shows !== first) return [];
    const next = levels.slice(i + 1).find((l) => l.shows !== 'both');
    return next?.shows === second ? [{ from: level.control, to: next.control }] : [];
  });
  const far = (c: { from: number; to: number }) =>
    Math.abs((c.from + c.to) / 2 - onset.onset.value);
  const nearest = changes.reduce<(typeof changes)[number] | null>(
    (best, c) => (best === null || far(c) < far(best) ? c : best),
    null,
  );
  if (!nearest) return null;
  return onset.oscillates === 'above'
    ? { steadyAt: nearest.from, sustainedAt: nearest.to }
    : { steadyAt: nearest.to, sustainedAt: nearest.from };
}
