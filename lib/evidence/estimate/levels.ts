import type { EstimateRequest, Interval, Note, Verdict } from '@/lib/contracts';
import { judge } from '../judge/judge';

/** One level as evidence: what it showed at which control value. */
export type Evidence = {
  x: number;
  sd: number;
  verdict: Verdict;
  preparation: string | null;
  direction: 'up' | 'down' | null;
  amplitude: Interval | null;
  growthRate: Interval | null;
};

/** Judges the records, fills in what they give, and sorts by control. */
export function gatherEvidence(levels: EstimateRequest['levels']): {
  evidence: Evidence[];
  notes: Note[];
} {
  const evidence: Evidence[] = [];
  let missing = 0;
  for (const level of levels) {
    const judged = level.record ? judge(level.record) : null;
    const growthRate = level.growthRate ?? judged?.growthRate ?? null;
    const verdict = level.verdict ?? judged?.verdict ?? verdictFromRate(growthRate);
    if (verdict === null) {
      missing++;
      continue;
    }
    evidence.push({
      x: level.control,
      sd: level.controlSd ?? 0,
      verdict,
      preparation: level.preparation ?? null,
      direction: level.direction ?? null,
      amplitude: level.amplitude ?? judged?.amplitude ?? null,
      growthRate,
    });
  }
  evidence.sort((a, b) => a.x - b.x);
  const notes: Note[] = [];
  if (missing > 0) {
    notes.push({
      code: 'evidence-missing',
      text: `${missing} of ${levels.length} levels carry neither a verdict nor a record and were left out.`,
    });
  }
  return { evidence, notes };
}

function verdictFromRate(rate: Interval | null): Verdict | null {
  if (rate === null) return null;
  if (rate.high < 0) return 'damped';
  return rate.low > 0 ? 'sustained' : 'undecided';
}

/** Steady and damped levels lie on the steady side. */
export function isSteady(e: Evidence): boolean {
  return e.verdict === 'steady' || e.verdict === 'damped';
}

export function isSustained(e: Evidence): boolean {
  return e.verdict === 'sustained';
}
