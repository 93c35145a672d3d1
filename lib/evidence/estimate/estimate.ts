import type { EstimateAnswer, EstimateRequest, Note, ObservedOnset, Side } from '@/lib/contracts';
import { figure as digits } from '../judge/words';
import { type Predicted, readPrediction } from './against-prediction';
import { type Evidence, gatherEvidence, isSteady, isSustained } from './levels';
import { workOnset } from './one-onset';
import { findChanges } from './segments';

/**
 * The observed onsets, with 90 % intervals on the control axis, from verdicts, amplitudes and decay
 * rates. The onset itself rests on the evidence alone; the prediction enters agreement and update.
 * With `predicted` or `oscillates` one onset is sought; otherwise up to two are reported.
 */
export function estimate(request: EstimateRequest): EstimateAnswer {
  const { evidence, notes } = gatherEvidence(request.levels);
  const predicted = readPrediction(request.predicted);
  const decided = evidence.filter((e) => e.verdict !== 'undecided');
  if (decided.length === 0) {
    return { onsets: [], notes: [...notes, nothing(request.levels.length)] };
  }
  const single = predicted !== null || request.oscillates !== undefined;
  const range = decided[decided.length - 1]!.x - decided[0]!.x;
  let changes = findChanges(evidence);
  if (request.oscillates) changes = changes.filter((c) => c.oscillates === request.oscillates);
  if (single && changes.length > 1) {
    const target = predicted?.median ?? changes[0]!.at;
    changes.sort((a, b) => Math.abs(a.at - target) - Math.abs(b.at - target));
    changes = changes.slice(0, 1);
  }
  const onsets: ObservedOnset[] = [];
  const all: Note[] = [...notes];
  for (const change of changes) {
    const result = workOnset(change.window, change.oscillates, predicted, range);
    if (!result) continue;
    onsets.push(result.onset);
    all.push(...result.notes);
  }
  if (onsets.length === 0) {
    const beyond = fromDecayAlone(evidence, request.oscillates, predicted, range);
    all.push(boundNote(evidence, request.oscillates));
    if (beyond) {
      onsets.push(beyond.onset);
      all.push(...beyond.notes);
    }
  }
  onsets.sort((a, b) => a.onset.value - b.onset.value);
  return { onsets, notes: all };
}

const figure = (control: number) => digits(control, 4);

/** An onset outside the levels worked so far, from decay rates, before anything oscillates. */
function fromDecayAlone(
  evidence: Evidence[],
  oscillates: Side | undefined,
  predicted: Predicted | null,
  range: number,
) {
  const sides: Side[] = oscillates ? [oscillates] : ['above', 'below'];
  for (const side of sides) {
    const quiet = steadyEnd(evidence, side);
    const result = workOnset(quiet, side, predicted, range);
    if (result) return result;
  }
  return null;
}

/** The evidence up to the first sustained level, coming from the steady end. */
function steadyEnd(evidence: Evidence[], side: Side): Evidence[] {
  const sustained = evidence.filter(isSustained).map((e) => e.x);
  if (sustained.length === 0) return evidence;
  const lowest = Math.min(...sustained);
  const highest = Math.max(...sustained);
  return evidence.filter((e) => (side === 'above' ? e.x < lowest : e.x > highest));
}

/** The bound that verdicts of one kind can give. */
function boundNote(evidence: Evidence[], oscillates: Side | undefined): Note {
  const steady = evidence.filter(isSteady).map((e) => e.x);
  const sustained = evidence.filter(isSustained).map((e) => e.x);
  const text = boundText(steady, sustained, oscillates);
  return { code: 'bound-only', text };
}

function boundText(steady: number[], sustained: number[], side: Side | undefined): string {
  if (sustained.length === 0) {
    const [low, high] = [figure(Math.min(...steady)), figure(Math.max(...steady))];
    if (side === 'above') return `No sustained level up to ${high}: the onset lies above ${high}.`;
    if (side === 'below') return `No sustained level down to ${low}: the onset lies below ${low}.`;
    return `No sustained level from ${low} up to ${high}: the onset, if there is one, lies above ${high} or below ${low}.`;
  }
  const [low, high] = [figure(Math.min(...sustained)), figure(Math.max(...sustained))];
  if (side === 'above') return `Sustained already at ${low}: the onset lies below ${low}.`;
  if (side === 'below') return `Sustained still at ${high}: the onset lies above ${high}.`;
  return `Sustained from ${low} to ${high} with no steady level: the onset lies outside these levels.`;
}

function nothing(levels: number): Note {
  return {
    code: 'cannot-estimate',
    text:
      levels === 0
        ? 'There are no levels yet: nothing can be said about the onset.'
        : 'No level has a decided verdict yet: nothing can be said about the onset. Longer or denser records would settle them.',
  };
}
