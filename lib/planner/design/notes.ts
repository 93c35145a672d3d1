import type { DesignedLevel, DesignRequest, Note } from '@/lib/contracts';
import { shown } from './anchors';
import type { Prior } from './prior';
import { shareAbove } from './prior';
import { startOf } from './settable';

const percent = (share: number) => `${Math.round(100 * share)} %`;

function levelCount(request: DesignRequest, doses: readonly number[]): Note[] {
  if (doses.length === request.levels) return [];
  const { limits } = request;
  if (doses.length > 0) {
    const text = `${doses.length} onset levels instead of ${request.levels}: no more settable doses lie within range, ceiling and smallest step.`;
    return [{ code: 'fewer-levels', text }];
  }
  const why =
    limits?.ceiling !== undefined && limits.ceiling < request.range[0]
      ? `the ceiling, ${shown(limits.ceiling)}, lies below the range`
      : `no settable dose within the range can be reached from ${shown(startOf(request))}`;
  return [{ code: 'fewer-levels', text: `No level can be set: ${why}.` }];
}

/** Ceiling and range against the predicted onset. */
function coverage(request: DesignRequest, prior: Prior): Note[] {
  const notes: Note[] = [];
  const ceiling = request.limits?.ceiling;
  if (ceiling !== undefined) {
    const over = shareAbove(prior, ceiling);
    if (over >= 0.05) {
      const text = `${percent(over)} of the predicted onset lies above the ceiling, ${shown(ceiling)}: the series may end before the onset.`;
      notes.push({ code: 'ceiling-below-onset', text });
    }
  }
  const [lo, hi] = request.range;
  const outside = 1 - shareAbove(prior, lo) + shareAbove(prior, hi);
  if (outside >= 0.1) {
    const text = `${percent(outside)} of the predicted onset lies outside the range ${shown(lo)} to ${shown(hi)}.`;
    notes.push({ code: 'range-misses-onset', text });
  }
  return notes;
}

function steps(request: DesignRequest, levels: readonly DesignedLevel[]): Note[] {
  const notes: Note[] = [];
  const { smallestStep = 0, largestStep, ceiling } = request.limits ?? {};
  const rungs = levels.filter((level) => level.purpose === 'approach').length;
  if (rungs > 0) {
    const text = `${rungs} approach ${rungs === 1 ? 'row keeps' : 'rows keep'} every rise within the largest step, ${shown(largestStep ?? 0)}.`;
    notes.push({ code: 'approach-added', text });
  }
  const sorted = [...new Set(levels.map((level) => level.dose))].sort((a, b) => a - b);
  const tight = sorted.some((d, i) => i > 0 && d - sorted[i - 1]! < smallestStep * (1 - 1e-9));
  if (tight) {
    const text = `Approach rows stand closer than the smallest step, ${shown(smallestStep)}: the largest step comes first.`;
    notes.push({ code: 'smallest-step', text });
  }
  if (ceiling !== undefined && startOf(request) > ceiling) {
    const text = `The dose in force before, ${shown(startOf(request))}, lies above the ceiling, ${shown(ceiling)}: the first row lowers it.`;
    notes.push({ code: 'limit-moved-level', text });
  }
  return notes;
}

/** Everything that the limits changed or refused, in words. */
export function limitNotes(
  request: DesignRequest,
  prior: Prior,
  doses: readonly number[],
  levels: readonly DesignedLevel[],
  sets: number,
): Note[] {
  const notes = [
    ...levelCount(request, doses),
    ...coverage(request, prior),
    ...steps(request, levels),
  ];
  if (sets > 1) {
    const text =
      'The settable doses leave a gap wider than the largest step: the series stays on one side of it.';
    notes.push({ code: 'limit-moved-level', text });
  }
  return notes;
}
