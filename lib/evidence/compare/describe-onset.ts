import type { Interval, ObservedOnset, Side } from '@/lib/contracts';
import { intervalWords, minus, sensible, withUnit } from './number-words';

export type ObservedForWords = Pick<ObservedOnset, 'onset' | 'oscillates' | 'agreement'> & {
  methods?: ObservedOnset['methods'];
  /** The last steady and first sustained level, where the onset is bracketed. */
  steadyAt?: number;
  sustainedAt?: number;
};

export type PredictedForWords = { oscillates: Side; onset: Interval };

export type OnsetWords = {
  /** One sentence for the head of the page. */
  finding: string;
  /** A paragraph with figures. */
  paragraph: string;
};

/**
 * Observed onsets beside predicted ones, in words. `observed` sorted by value; each is set against the
 * predicted onset of its side that lies nearest. `unit` is the control parameter's, as shown.
 */
export function describeOnset(
  observed: ObservedForWords[],
  predicted: PredictedForWords[],
  unit: string,
): OnsetWords {
  if (observed.length === 0) return nothingObserved(predicted, unit);
  const pairs = observed.map((o) => ({ o, p: partner(o, predicted) }));
  const sentences = pairs.map(({ o, p }, i) => describeOne(o, p, nameOf(i, pairs.length), unit));
  return { finding: findingOf(pairs), paragraph: sentences.join(' ') };
}

type Pair = { o: ObservedForWords; p: PredictedForWords | null };

function partner(o: ObservedForWords, predicted: PredictedForWords[]): PredictedForWords | null {
  const same = predicted.filter((p) => p.oscillates === o.oscillates);
  if (same.length === 0) return null;
  const gap = (p: PredictedForWords) => Math.abs(p.onset.value - o.onset.value);
  return same.reduce((a, b) => (gap(b) < gap(a) ? b : a));
}

function nameOf(index: number, count: number): string {
  if (count === 1) return 'onset';
  if (count > 2) return `onset ${index + 1}`;
  return index === 0 ? 'lower onset' : 'upper onset';
}

function findingOf(pairs: Pair[]): string {
  const compared = pairs.filter((pair) => pair.p !== null && pair.o.agreement !== null);
  const many = pairs.length > 1;
  if (compared.length === 0) {
    return many
      ? `${capital(count(pairs.length))} onsets were observed.`
      : 'An onset was observed.';
  }
  const all = (test: (a: NonNullable<ObservedForWords['agreement']>) => boolean) =>
    compared.length === pairs.length && compared.every((pair) => test(pair.o.agreement!));
  const subject = many ? (pairs.length === 2 ? 'Both onsets' : 'All onsets') : 'The onset';
  const verb = many ? 'lie' : 'lies';
  if (all((a) => a.verdict === 'agrees')) {
    return `${subject} ${many ? 'agree' : 'agrees'} with the prediction.`;
  }
  if (all((a) => a.verdict === 'cannot tell')) {
    return `${subject} ${many ? 'are' : 'is'} not yet known well enough to be set against the prediction.`;
  }
  const someDiffer = compared.some((pair) => pair.o.agreement!.verdict === 'differs');
  if (someDiffer && all((a) => a.difference > 0)) return `${subject} ${verb} above the prediction.`;
  if (someDiffer && all((a) => a.difference < 0)) return `${subject} ${verb} below the prediction.`;
  const parts = pairs.map((pair, i) => `the ${nameOf(i, pairs.length)} ${verdictWords(pair)}`);
  return `${capital(parts.join(', '))}.`;
}

function verdictWords({ o }: Pair): string {
  switch (o.agreement?.verdict) {
    case 'agrees':
      return 'agrees with the prediction';
    case 'differs':
      return `lies ${o.agreement.difference > 0 ? 'above' : 'below'} the prediction`;
    case 'cannot tell':
      return 'is not yet known well enough';
    default:
      return 'was not predicted';
  }
}

function describeOne(
  o: ObservedForWords,
  p: PredictedForWords | null,
  name: string,
  unit: string,
): string {
  const observed = `observed at ${withUnit(intervalWords(o.onset), unit)}`;
  const levels = levelWords(o, unit);
  if (p === null) {
    return `${levels}${levels ? 'the' : 'The'} ${name} was ${observed}; none was predicted on this side.`;
  }
  const predicted = `predicted at ${withUnit(intervalWords(p.onset), unit)}`;
  const start = `${levels}${levels ? 'the' : 'The'} ${name}`;
  if (o.agreement === null) return `${start} was ${observed}, ${predicted}.`;
  const error = `normalised error ${minus(sensible(o.agreement.normalisedError, 1))}`;
  const middle = {
    agrees: 'agrees with the predicted one',
    differs: 'differs from the predicted one',
    'cannot tell': 'is not known well enough to be told from the predicted one',
  }[o.agreement.verdict];
  return `${start} ${middle} (${error}): ${observed}, ${predicted}.`;
}

function levelWords(o: ObservedForWords, unit: string): string {
  if (o.steadyAt === undefined || o.sustainedAt === undefined) return '';
  const steady = withUnit(minus(sensible(o.steadyAt)), unit);
  const sustained = withUnit(minus(sensible(o.sustainedAt)), unit);
  return o.oscillates === 'above'
    ? `Steady up to ${steady} and sustained from ${sustained}: `
    : `Sustained up to ${sustained} and steady from ${steady}: `;
}

function nothingObserved(predicted: PredictedForWords[], unit: string): OnsetWords {
  const first = predicted[0];
  const finding = 'No onset has been observed yet.';
  if (!first) return { finding, paragraph: finding };
  const places = predicted.map((p) => withUnit(intervalWords(p.onset), unit)).join(' and ');
  const noun = predicted.length === 1 ? 'onset is' : 'onsets are';
  return { finding, paragraph: `${finding} The predicted ${noun} at ${places}.` };
}

function count(n: number): string {
  return ['no', 'one', 'two', 'three', 'four'][n] ?? String(n);
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}
