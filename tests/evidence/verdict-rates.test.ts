import { describe, expect, it } from 'vitest';
import { judge } from '@/lib/evidence/judge/judge';
import {
  evenTimes,
  firstOrder,
  limitCycle,
  nudge,
  quasiCycle,
  type Random,
  type Record_,
  random,
  relaxation,
  white,
} from './simulated-records';

type Family = [string, (r: Random) => Record_];

function count(make: Family[1], runs: number) {
  const counts = { steady: 0, damped: 0, sustained: 0, undecided: 0 };
  for (let seed = 1; seed <= runs; seed++) counts[judge(make(random(seed))).verdict]++;
  return counts;
}

const drifting: Family[1] = (r) => {
  const phase = 2 * Math.PI * r.uniform();
  const times = evenTimes(96);
  return { times, values: times.map((t) => 3 * Math.sin(t / 24 + phase) + 0.3 * r.normal()) };
};

const withOutliers: Family[1] = (r) => {
  const times = evenTimes(72);
  return { times, values: times.map(() => r.normal() + (r.uniform() < 0.03 ? 8 : 0)) };
};

const NOT_SUSTAINED: Family[] = [
  ['white noise', (r) => white(r, 48)],
  ['AR(1), 0.7', (r) => firstOrder(r, 48, 0.7)],
  ['noise-kept, decay in half a cycle', (r) => quasiCycle(r, 48, 12, 0.5)],
  ['noise-kept, decay in two cycles', (r) => quasiCycle(r, 48, 12, 2)],
  ['noise-kept, two cycles, ten recorded', (r) => quasiCycle(r, 120, 12, 2)],
  ['noise-kept, measured with noise', (r) => quasiCycle(r, 96, 12, 2, 0.3)],
  ['slow drift', drifting],
  ['steady with outliers', withOutliers],
];

describe('records without a sustained rhythm', () => {
  const runs = 20;
  let sustained = 0;
  it.each(NOT_SUSTAINED)('%s: hardly ever called sustained', (_, make) => {
    const counts = count(make, runs);
    sustained += counts.sustained;
    expect(counts.sustained).toBeLessThanOrEqual(1);
  });
  it('all together at most one in fifty', () => {
    expect(sustained).toBeLessThanOrEqual((NOT_SUSTAINED.length * runs) / 50);
  });
  it('white noise is called steady', () => {
    expect(count((r) => white(r, 60), 20).steady).toBeGreaterThanOrEqual(18);
  });
  it('a noise-kept rhythm over twenty cycles is mostly called damped', () => {
    const counts = count((r) => quasiCycle(r, 240, 12, 2), 15);
    expect(counts.damped).toBeGreaterThanOrEqual(10);
    expect(counts.steady).toBe(0);
  });
});

describe('limit cycles, 12 readings a cycle, noise up to a fifth of the amplitude', () => {
  const gaps = (r: Random) =>
    Array.from({ length: 120 }, () => 120 * r.uniform()).sort((a, b) => a - b);
  const cases: Family[] = [
    ['8 cycles', (r) => limitCycle(r, evenTimes(97), 12, 0.2)],
    ['10 cycles', (r) => limitCycle(r, evenTimes(121), 12, 0.2)],
    ['uneven times', (r) => limitCycle(r, gaps(r), 12, 0.2)],
    ['relaxation shape', (r) => limitCycle(r, evenTimes(121), 12, 0.15, { shape: relaxation })],
  ];
  it.each(cases)('%s: called sustained at least nine times in ten', (_, make) => {
    expect(count(make, 20).sustained).toBeGreaterThanOrEqual(18);
  });
  it('three cycles are not enough to call it', () => {
    const counts = count((r) => limitCycle(r, evenTimes(36), 12, 0.1), 20);
    expect(counts.sustained).toBe(0);
    expect(counts.undecided).toBeGreaterThanOrEqual(16);
  });
  it('a wandering phase is told from a noise-kept rhythm over twenty cycles', () => {
    const make: Family[1] = (r) => limitCycle(r, evenTimes(240), 12, 0.1, { diffusion: 0.1 });
    expect(count(make, 10).sustained).toBeGreaterThanOrEqual(7);
  });
});

describe('nudges that die away', () => {
  const cases: Family[] = [
    ['5 cycles, −0.3 a cycle', (r) => nudge(r, 5, 12, -0.3, 0.1)],
    ['8 cycles, −0.5 a cycle', (r) => nudge(r, 8, 12, -0.5, 0.2)],
    ['10 cycles, −0.1 a cycle', (r) => nudge(r, 10, 12, -0.1, 0.2)],
  ];
  it.each(cases)('%s: called damped at least nine times in ten', (_, make) => {
    const counts = count(make, 20);
    expect(counts.damped).toBeGreaterThanOrEqual(18);
    expect(counts.sustained).toBe(0);
  });
  it('the 90 % interval of the growth rate holds the truth in 80 to 98 of 100', () => {
    let inside = 0;
    for (let seed = 1; seed <= 40; seed++) {
      const rate = judge(nudge(random(seed), 6, 12, -0.2, 0.1)).growthRate!;
      if (rate.low <= -0.2 / 12 && rate.high >= -0.2 / 12) inside++;
    }
    expect(inside).toBeGreaterThanOrEqual(32);
    expect(inside).toBeLessThanOrEqual(39);
  });
});
