import { describe, expect, it } from 'vitest';
import { describeOnset } from '@/lib/evidence/compare/describe-onset';
import { intervalWords, sensible, withUnit } from '@/lib/evidence/compare/number-words';

const lower = {
  onset: { value: 0.48, low: 0.336, high: 0.624 },
  oscillates: 'above' as const,
  agreement: { difference: 0.329, normalisedError: 1.83, verdict: 'differs' as const },
  steadyAt: 0.32,
  sustainedAt: 0.64,
};
const upper = {
  onset: { value: 1.159, low: 1.04, high: 1.257 },
  oscillates: 'below' as const,
  agreement: { difference: 0.189, normalisedError: 0.91, verdict: 'agrees' as const },
};
const predicted = [
  { oscillates: 'above' as const, onset: { value: 0.151, low: 0.13, high: 0.18 } },
  { oscillates: 'below' as const, onset: { value: 0.97, low: 0.9, high: 1.05 } },
];

describe('onsets in words', () => {
  it('says that both lie above the prediction, and by how much the lower one differs', () => {
    const words = describeOnset([lower, upper], predicted, '/d');
    expect(words.finding).toBe('Both onsets lie above the prediction.');
    expect(words.paragraph).toContain('Steady up to 0.32/d and sustained from 0.64/d');
    expect(words.paragraph).toContain('the lower onset differs from the predicted one');
    expect(words.paragraph).toContain('normalised error 1.8');
    expect(words.paragraph).toContain('The upper onset agrees with the predicted one');
  });

  it('names each onset where they do not agree in direction', () => {
    const agreement = { difference: -0.1, normalisedError: -1.4, verdict: 'differs' as const };
    const words = describeOnset([lower, { ...upper, agreement }], predicted, '/d');
    expect(words.finding).toBe(
      'The lower onset lies above the prediction, the upper onset lies below the prediction.',
    );
  });

  it('says plainly when nothing was observed, predicted or decided', () => {
    expect(describeOnset([], [], '').finding).toBe('No onset has been observed yet.');
    expect(describeOnset([], predicted, '/d').paragraph).toContain('0.151');
    expect(describeOnset([{ ...lower, agreement: null }], [], 'mM').paragraph).toContain(
      'none was predicted on this side',
    );
  });

  it('writes figures with digits that their interval supports', () => {
    expect(intervalWords({ value: 0.48123, low: 0.33612, high: 0.62431 })).toBe('0.48 (0.34–0.62)');
    expect(intervalWords({ value: -0.05, low: -0.15, high: 0.03 })).toBe('−0.05 (−0.15 to 0.03)');
    expect(sensible(1234.567, 30)).toBe('1235');
    expect(sensible(18.49971)).toBe('18.5');
    expect(withUnit('12', 'mM')).toBe('12\u202fmM');
  });
});
