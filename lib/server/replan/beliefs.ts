import type { EstimateAnswer, PredictedOnset, Verdict } from '@/lib/contracts';
import type { Belief } from '@/lib/planner/replan/belief';

/** A run's verdict on the control axis. */
export type Seen = { control: number; verdict: Verdict | null };

/** Whether a draw of the onset could have given what was seen at that control value. */
function agrees(onset: number, { control, verdict }: Seen, oscillates: 'above' | 'below'): boolean {
  if (verdict === null || verdict === 'undecided') return true;
  const beyond = oscillates === 'above' ? control > onset : control < onset;
  return beyond === (verdict === 'sustained');
}

/**
 * Where an onset is thought to be after the evidence: the updated prediction; else the observed
 * interval; else, while the evidence bounds it from one side only, those predicted draws that the
 * verdicts leave. The draws that contradict a verdict least are kept where every one does.
 */
export function beliefOf(
  answer: EstimateAnswer | undefined,
  predicted: PredictedOnset,
  seen: readonly Seen[],
): Belief {
  const found = answer?.onsets[0];
  if (found?.updated && found.updated.values.length > 0) return { values: found.updated.values };
  if (found) return { interval: found.onset };
  const draws = predicted.spread?.values.length ? predicted.spread.values : [predicted.value];
  const against = draws.map(
    (onset) => seen.filter((s) => !agrees(onset, s, predicted.oscillates)).length,
  );
  const least = Math.min(...against);
  return { values: draws.filter((_, i) => against[i] === least) };
}
