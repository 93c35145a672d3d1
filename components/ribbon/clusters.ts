import type { MarkState } from '@/components/marks/states';
import type { Dimensions } from './dimensions';
import type { RibbonLevel, RibbonSize } from './types';

export type PlacedMark = {
  key: string;
  state: MarkState;
  x: number;
  y: number;
  /** shown when one mark stands for more than it can show side by side */
  count: number | null;
};
export type PlacedNotch = { key: string; x: number };

/** The commonest state; a tie is undecided. */
export function commonest(states: readonly MarkState[]): MarkState {
  const counts = new Map<MarkState, number>();
  for (const state of states) counts.set(state, (counts.get(state) ?? 0) + 1);
  const top = Math.max(...counts.values());
  const leaders = [...counts].filter(([, n]) => n === top);
  return leaders.length === 1 ? leaders[0]![0] : 'undecided';
}

/** Most marks that stand side by side at one place of the page ribbon. */
const MOST_SIDE_BY_SIDE = 3;

type Placed = RibbonLevel & { state: MarkState; x: number; y: number };

/**
 * Marks of the runs and notches of the planned levels. Marks at one place: page side by side, above
 * three one mark and a count; card and list show the commonest, a tie is undecided.
 */
export function placeLevels(
  levels: readonly RibbonLevel[],
  x: (control: number) => number,
  dim: Dimensions,
  size: RibbonSize,
): { marks: PlacedMark[]; notches: PlacedNotch[] } {
  const notches: PlacedNotch[] = [];
  const groups = new Map<string, Placed[]>();
  levels.forEach((level, i) => {
    const at = x(level.control);
    if (level.state === 'planned') {
      notches.push({ key: level.id ?? `n${i}`, x: at });
      return;
    }
    const y = dim.lanes[level.direction ?? 'none'];
    const place = `${Math.round(at * 2)} ${y}`;
    groups.set(place, [...(groups.get(place) ?? []), { ...level, state: level.state, x: at, y }]);
  });
  const marks = [...groups].flatMap(([place, group]) => placeGroup(place, group, dim, size));
  return { marks: marks.sort((a, b) => a.x - b.x), notches };
}

function placeGroup(place: string, group: Placed[], dim: Dimensions, size: RibbonSize) {
  const [first] = group;
  if (!first) return [];
  const several = size !== 'page' || group.length > MOST_SIDE_BY_SIDE;
  if (several) {
    const state = commonest(group.map((g) => g.state));
    const count = size === 'page' && group.length > 1 ? group.length : null;
    return [{ key: place, state, x: first.x, y: first.y, count }];
  }
  const pitch = dim.mark + 2;
  return group.map((level, i) => ({
    key: level.id ?? `${place} ${i}`,
    state: level.state,
    x: level.x + (i - (group.length - 1) / 2) * pitch,
    y: level.y,
    count: null,
  }));
}
