import type { Interval, Note, ObservedOnset, Side } from '@/lib/contracts';
import { agreementWith, type Predicted, updatePrediction } from './against-prediction';
import { type Bracket, bracketInterval, bracketOf } from './bracket';
import { betweenPreparations, combine } from './combine';
import type { Evidence } from './levels';
import { byAmplitude, byBracket, byDecayRate, byThreshold, type Worked } from './methods';
import { orient } from './segments';

/**
 * One onset from the evidence that concerns it; null when no method gives one. All methods work
 * with control increasing towards the oscillation and are turned back at the end.
 */
export function workOnset(
  window: Evidence[],
  oscillates: Side,
  predicted: Predicted | null,
  range: number,
): { onset: ObservedOnset; notes: Note[] } | null {
  const all = orient(window, oscillates);
  const notes: Note[] = [];
  const loop = hysteresisOf(all, oscillates);
  if (loop?.apart) {
    notes.push({
      code: 'hysteresis',
      text: 'The oscillation begins and ends at different settings: the onset is taken from the runs that approach it from the steady side.',
    });
  }
  const entry = oscillates === 'above' ? 'up' : 'down';
  const levels = loop?.apart ? all.filter((e) => e.direction !== opposite(entry)) : all;
  const worked = workMethods(levels, loop?.apart ?? false);
  const own = preparationsOf(levels);
  const chosen = choose(
    worked,
    own.map((p) => p.onset),
  );
  if (chosen === null) return null;
  const back = (i: Interval): Interval =>
    oscillates === 'above' ? i : { value: -i.value, low: -i.high, high: -i.low };
  const bracketBack = (b: Bracket): Bracket =>
    oscillates === 'above' ? b : { low: -b.high, high: -b.low, overlap: b.overlap };
  const onset = back(chosen.onset);
  const base = chosen.bracket ? bracketBack(chosen.bracket) : null;
  const update = predicted && updatePrediction(predicted, onset, base);
  if (update?.overruled) notes.push(overruledNote(onset, predicted!));
  notes.push(...remarks(levels, worked));
  return {
    notes,
    onset: {
      onset,
      oscillates,
      methods: chosen.methods.map(({ name, onset: o, used, why }) => ({
        name,
        onset: o && back(o),
        used,
        why,
      })),
      byPreparation: own.map((p) => ({ preparation: p.preparation, onset: back(p.onset) })),
      hysteresis: loop && { up: back(loop.up), down: back(loop.down) },
      agreement: predicted && agreementWith(onset, predicted, range),
      updated: update && { values: update.values },
    },
  };
}

function workMethods(levels: Evidence[], abrupt: boolean): Worked[] {
  const bracket = byBracket(levels);
  const amplitude = byAmplitude(levels, bracket.bracket);
  if (abrupt && amplitude.used) {
    amplitude.used = false;
    amplitude.why = 'Up and down differ: an abrupt onset, where the law does not hold.';
  }
  const threshold = byThreshold(levels, bracket.bracket);
  return [bracket, threshold, amplitude, byDecayRate(levels, bracket.bracket)];
}

type Chosen = { onset: Interval; bracket: Bracket | null; methods: Worked[] };

function choose(worked: Worked[], own: Interval[]): Chosen | null {
  if (worked.every((m) => !m.used)) {
    const bracket = worked.find((m) => m.name === 'bracket' && m.onset);
    if (!bracket) return null;
    bracket.used = true;
  }
  const used = worked.filter((m) => m.used && m.onset);
  const combined = used.length > 1 ? combine(used) : null;
  if (used.length > 1 && combined === null) {
    for (const m of used.slice(1)) {
      m.used = false;
      m.why = `${m.why} It contradicts the ${used[0]!.name} and was not used.`;
    }
  }
  const first = used[0]!;
  const onset = betweenPreparations(combined ?? first.onset!, own);
  const isPlain = combined === null && onset.low === first.onset!.low;
  const methods = [...worked, combinedRow(combined ? onset : null, used)];
  return { onset, bracket: isPlain ? (first.bracket ?? null) : null, methods };
}

function combinedRow(onset: Interval | null, used: Worked[]): Worked {
  const names = used.map((m) => m.name).join(', ');
  return {
    name: 'combined',
    onset,
    used: onset !== null,
    why: onset
      ? `Product of what ${names} say, each from its own part of the evidence.`
      : 'One method alone is used: there is nothing to combine.',
  };
}

function preparationsOf(levels: Evidence[]) {
  const names = [...new Set(levels.map((e) => e.preparation).filter((p) => p !== null))];
  return names.flatMap((preparation) => {
    const own = levels.filter((e) => e.preparation === preparation);
    const bracket = bracketOf(own);
    return bracket ? [{ preparation, onset: bracketInterval(bracket, own) }] : [];
  });
}

function opposite(direction: 'up' | 'down'): 'up' | 'down' {
  return direction === 'up' ? 'down' : 'up';
}

/** Onsets of the rising and the falling runs; `apart` where their intervals do not meet. */
function hysteresisOf(levels: Evidence[], oscillates: Side) {
  const of = (direction: 'up' | 'down') => {
    const own = levels.filter((e) => e.direction === direction);
    const bracket = bracketOf(own);
    return bracket && bracketInterval(bracket, own);
  };
  const up = of('up');
  const down = of('down');
  if (!up || !down) return null;
  const [entering, leaving] = oscillates === 'above' ? [up, down] : [down, up];
  return { up, down, apart: entering.low > leaving.high };
}

function overruledNote(onset: Interval, predicted: Predicted): Note {
  const where = onset.value > predicted.median ? 'above' : 'below';
  return {
    code: 'prediction-overruled',
    text: `The observed onset lies more than 2 sd ${where} the prediction: the updated prediction follows the evidence alone.`,
  };
}

function remarks(levels: Evidence[], worked: Worked[]): Note[] {
  const notes: Note[] = [];
  const bracket = worked.find((m) => m.name === 'bracket')?.bracket;
  if (bracket?.overlap) {
    notes.push({
      code: 'inconsistent-verdicts',
      text: 'Steady and sustained verdicts overlap around this onset; it is estimated as the threshold between them.',
    });
  } else if (bracket) {
    notes.push({
      code: 'perfect-separation',
      text: 'The verdicts change cleanly from steady to sustained: they give a bracket, and no slope.',
    });
  }
  if (new Set(levels.map((e) => e.x)).size < 4) {
    notes.push({ code: 'few-levels', text: 'Fewer than four levels bear on this onset.' });
  }
  return notes;
}
