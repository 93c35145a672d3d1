import { describe, expect, it } from 'vitest';
import { type JudgeRequest, judgeAnswer } from '@/lib/contracts';
import { judge } from '@/lib/evidence/judge/judge';
import { referenceColumns } from './reference-data';
import { evenTimes, limitCycle, nudge, random, white } from './simulated-records';

const settles = (reasons: string[]) => reasons.some((r) => r.startsWith('To settle it'));

describe('judge', () => {
  it('leaves fewer than 8 readings undecided and says what would settle them', () => {
    const answer = judge({ times: [0, 1, 2], values: [1, null, 2] });
    expect(answer.verdict).toBe('undecided');
    expect(settles(answer.reasons)).toBe(true);
    expect(judge({ times: [], values: [] }).verdict).toBe('undecided');
  });

  it('calls equal readings steady, whatever their offset', () => {
    const times = evenTimes(30);
    expect(judge({ times, values: times.map(() => 0.1 + 0.2) }).verdict).toBe('steady');
    expect(judge({ times, values: times.map(() => -1e9) }).verdict).toBe('steady');
  });

  it('does not call luteinizing hormone (R datasets, lh) rhythmic', () => {
    const { x, y } = referenceColumns('lh.csv', 1, 2);
    const answer = judge({ times: x, values: y });
    expect(['steady', 'undecided']).toContain(answer.verdict);
    expect(answer.period).toBeNull();
  });

  it('sees the annual rhythm of the NIST ENSO record beside its slow wandering', () => {
    const { x, y } = referenceColumns('enso.csv', 0, 1);
    const answer = judge({ times: x, values: y });
    expect(answer.period!.value).toBeGreaterThan(11.8);
    expect(answer.period!.value).toBeLessThan(12.2);
  });

  it('gives the same answer in other units of time and value', () => {
    const { times, values } = limitCycle(random(4), evenTimes(100), 12, 0.2);
    const plain = judge({ times, values });
    for (const [a, b, c] of [
      [1e9, 1e-9, 0],
      [1e-9, 1e9, 0],
      [1, 1, 1000],
    ] as const) {
      const other = judge({
        times: times.map((t) => t * a + 5 * a),
        values: values.map((v) => v * b + c),
      });
      expect(other.verdict).toBe(plain.verdict);
      expect(other.period!.value / a / plain.period!.value).toBeCloseTo(1, 4);
      expect(other.amplitude!.value / b / plain.amplitude!.value).toBeCloseTo(1, 4);
      expect((other.growthRate!.value - plain.growthRate!.value / a) * a).toBeCloseTo(0, 4);
    }
  });

  it('gives the same answer for unsorted readings, and leaves readings outside the window out', () => {
    const { times, values } = limitCycle(random(5), evenTimes(100), 12, 0.2);
    const order = times.map((_, i) => (i * 37) % 100);
    const shuffled = judge({
      times: [...order.map((i) => times[i]!), -5, 400],
      values: [...order.map((i) => values[i]!), 1e6, -1e6],
      from: 0,
      until: 99,
    });
    expect(shuffled).toEqual(judge({ times, values }));
  });

  it('finds period, amplitude and covered cycles of a known rhythm with missing values', () => {
    const { times, values } = limitCycle(random(6), evenTimes(120), 12, 0.1);
    const request: JudgeRequest = { times, values: values.map((v, i) => (i % 7 === 3 ? null : v)) };
    const answer = judge(request);
    expect(judgeAnswer.parse(answer)).toEqual(answer);
    expect(answer.verdict).toBe('sustained');
    expect(answer.period!.value).toBeCloseTo(12, 0);
    expect(answer.amplitude!.low).toBeLessThan(1.02);
    expect(answer.amplitude!.high).toBeGreaterThan(0.98);
    expect(answer.cyclesCovered).toBeCloseTo(119 / 12, 0);
    expect(answer.falseAlarm!).toBeLessThan(1e-9);
  });

  it('gives the growth rate of a decaying nudge in 1/time', () => {
    const answer = judge(nudge(random(7), 6, 12, -0.3, 0.03));
    expect(answer.verdict).toBe('damped');
    expect(answer.growthRate!.value).toBeCloseTo(-0.3 / 12, 2);
    expect(answer.growthRate!.high).toBeLessThan(0);
  });

  it('leaves a quiet record undecided where the expected rhythm could not have been seen', () => {
    const { times, values } = white(random(8), 40);
    const short = judge({ times, values, expectedPeriod: { low: 20, high: 30 } });
    expect(short.verdict).toBe('undecided');
    expect(settles(short.reasons)).toBe(true);
    const sparse = judge({ times, values, expectedPeriod: { low: 2, high: 3 } });
    expect(sparse.verdict).toBe('undecided');
    expect(judge({ times, values, expectedPeriod: { low: 8, high: 12 } }).verdict).toBe('steady');
  });

  it('uses the stated measurement error', () => {
    const { times, values } = white(random(9), 60);
    expect(judge({ times, values, noiseSd: 1 }).reasons[0]).toContain('measurement error alone');
    expect(judge({ times, values, noiseSd: 0.2 }).reasons[0]).toContain('times the stated');
  });

  it('averages a record of 200,000 readings down and still judges it', () => {
    const r = random(10);
    const times = evenTimes(200_000);
    const values = times.map((t) => Math.cos((2 * Math.PI * t) / 20_000) + r.normal());
    const answer = judge({ times, values });
    expect(answer.verdict).toBe('sustained');
    expect(answer.reasons.some((x) => x.includes('averaged'))).toBe(true);
    const fast = judge({ times, values: times.map((t) => Math.cos(t / 3) + 0.2 * r.normal()) });
    expect(fast.verdict).toBe('sustained');
    expect(fast.period!.value).toBeCloseTo(6 * Math.PI, 1);
  });

  it('calls regular spikes sustained, and single-reading ones a rhythm at least', () => {
    const times = evenTimes(240);
    const r = random(12);
    const spiky = (width: number) => times.map((t) => (t % 24 < width ? 1 : 0) + 0.02 * r.normal());
    for (const width of [1, 2, 3]) {
      const answer = judge({ times, values: spiky(width) });
      expect(Math.abs(answer.period!.value / 24 - 1)).toBeLessThan(0.02);
      if (width > 1) expect(answer.verdict).toBe('sustained');
      else expect(['sustained', 'undecided']).toContain(answer.verdict);
    }
  });

  it('says what to do where most of the record is a gap', () => {
    const times = [...evenTimes(30), ...evenTimes(30).map((t) => t + 1e6)];
    const answer = judge({ times, values: times.map((t) => Math.sin(t)) });
    expect(answer.verdict).toBe('undecided');
    expect(settles(answer.reasons)).toBe(true);
  });
});
