import type { OnsetEstimate } from '@/db/queries/estimates';
import type { PredictAnswer } from '@/lib/contracts';
import { describeOnset } from '@/lib/evidence/compare/describe-onset';
import { unitText } from '@/lib/format';
import { edgesOf } from './onset-edges';
import type { RunRow } from './run-rows';

/** The observed onsets of an estimate in order, what they are in words, and its notes. */
export function onsetView(
  estimate: OnsetEstimate,
  of: { answer: PredictAnswer; unit: string; rows: RunRow[] },
) {
  const onsets = estimate.answers
    .flatMap((a) => a.onsets)
    .sort((a, b) => a.onset.value - b.onset.value);
  const predicted = of.answer.onsets.map((o) => ({
    oscillates: o.oscillates,
    onset: { value: o.value, low: o.spread?.low ?? o.value, high: o.spread?.high ?? o.value },
  }));
  const words = describeOnset(
    onsets.map((o) => ({ ...o, ...edgesOf(of.rows, o) })),
    predicted,
    unitText(of.unit),
  );
  const notes = [...new Set(estimate.answers.flatMap((a) => a.notes.map((n) => n.text)))];
  return { onsets, words, notes };
}

/** What would settle the runs that are undecided, in the words of their verdicts. */
export function undecidedWords(rows: readonly RunRow[]): string[] {
  return rows
    .filter((r) => r.verdict === 'undecided')
    .flatMap((r) => {
      const said = r.computed?.answer?.reasons ?? [];
      const settle = said.find((reason) => reason.startsWith('To settle it')) ?? said[0];
      return settle ? [`Run ${r.number}, preparation ${r.preparation}: ${settle}`] : [];
    });
}
