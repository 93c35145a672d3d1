import { v7 as uuid } from 'uuid';
import { describe, expect, test } from 'vitest';
import { EngineError, predictAnswer } from '@/lib/contracts';
import { workPredict } from '@/lib/server/jobs/works/predict';
import { brusselator, brusselatorControl } from './studies-fixture';

const input = (over: Record<string, unknown> = {}, draws = 40) => ({
  systemVersionId: uuid(),
  request: { model: { ...brusselator, ...over }, control: brusselatorControl, draws, seed: 1 },
});

describe('the calculation of a prediction', () => {
  // Prigogine & Lefever 1968, J Chem Phys 48:1695: with A = 1 the onset is at B = 1 + A² = 2, where
  // the frequency is A.
  test('finds the onset of the Brusselator, reports progress, and answers in the contract’s shape', () => {
    const stages: [number, number, string][] = [];
    const answer = predictAnswer.parse(workPredict(input(), (...step) => stages.push(step)));
    expect(answer.onsets).toHaveLength(1);
    const [onset] = answer.onsets;
    expect(onset?.value).toBeCloseTo(2, 8);
    expect(onset?.period).toBeCloseTo(2 * Math.PI, 6);
    expect(onset?.oscillates).toBe('above');
    expect(onset?.spread?.draws).toBe(40);
    expect(stages.length).toBeGreaterThan(1);
    expect(stages.every(([done, total]) => done >= 0 && done <= total)).toBe(true);
  });

  test('says in words what is wrong with a system that blows up away from its start', () => {
    const equations = { x: 'A/(x - 1) + exp(x^9)', y: 'B*x - x^2*y' };
    let caught: unknown;
    try {
      workPredict(input({ equations }, 0), () => {});
    } catch (error) {
      caught = error;
    }
    expect(caught).toBeInstanceOf(EngineError);
    expect((caught as EngineError).code).not.toBe('internal');
    expect((caught as EngineError).message.length).toBeGreaterThan(20);
  });
});
