import { describe, expect, it } from 'vitest';
import { controlDraws } from '@/lib/planner/replan/belief';
import { proposeLevels, type ReplanInput } from '@/lib/planner/replan/propose-levels';
import { withinEnvelope } from '@/lib/planner/replan/within-envelope';
import { randomSource } from '@/lib/sim/random/generator';

const envelope = { doseLow: 0, doseHigh: 20, ceiling: 18, largestStep: null };
const draws = Array.from({ length: 200 }, (_, i) => 8 + i / 50);
const base: ReplanInput = {
  onset: { values: draws },
  toDose: (control) => control,
  oscillates: 'above',
  range: [0, 20],
  order: 'ascending',
  count: 3,
  replicates: 2,
  envelope,
  done: [],
};
const propose = (more: Partial<ReplanInput>) => proposeLevels({ ...base, ...more });
const onset = (p: ReturnType<typeof propose>) =>
  p.levels.filter((l) => l.purpose === 'onset').map((l) => l.dose);

describe('the next levels', () => {
  it('quarter an even onset, with a reason each and both anchors at first', () => {
    const found = propose({});
    onset(found).forEach((dose, i) => {
      expect(dose).toBeCloseTo(9 + i, 1);
    });
    expect(found.levels.map((l) => l.purpose)).toEqual([
      'baseline',
      'onset',
      'onset',
      'onset',
      'far side',
    ]);
    expect(found.levels[2]!.why).toContain('50 %');
    expect(new Set(found.levels.map((l) => l.why)).size).toBe(5);
    // The ceiling, not the end of the range.
    expect(found.levels.at(-1)!.dose).toBe(18);
  });

  it('need no anchors where decided levels stand in for them', () => {
    const done = [
      { dose: 2, verdict: 'damped' as const },
      { dose: 15, verdict: 'sustained' as const },
    ];
    expect(propose({ done }).levels.every((l) => l.purpose === 'onset')).toBe(true);
    const onlySteady = propose({ done: done.slice(0, 1) });
    expect(onlySteady.levels.map((l) => l.purpose)).toEqual([
      'onset',
      'onset',
      'onset',
      'far side',
    ]);
  });

  it('do not repeat a decided level, but may repeat an undecided one', () => {
    const first = onset(propose({}));
    const decided = first.map((dose) => ({ dose, verdict: 'steady' as const }));
    const next = onset(propose({ done: decided }));
    expect(next).toHaveLength(3);
    for (const dose of next) {
      for (const old of first) expect(Math.abs(dose - old)).toBeGreaterThan(0.05);
    }
    const open = first.map((dose) => ({ dose, verdict: 'undecided' as const }));
    const again = propose({ done: open });
    expect(onset(again)).toEqual(first);
    expect(again.levels[1]!.why).toContain('left undecided');
  });

  it('pass over a decided dose of a grid on the way up without setting it as a level', () => {
    const grid = Array.from({ length: 21 }, (_, i) => i);
    const done = [{ dose: 10, verdict: 'steady' as const }];
    const found = propose({ done, limits: { grid, largestStep: 1, start: 0 } });
    expect(onset(found)).toEqual(expect.arrayContaining([9, 11]));
    expect(onset(found)).not.toContain(10);
    expect(found.levels.find((l) => l.dose === 10)?.purpose).toBe('approach');
  });

  it('work through a falling dose map: more dose, less control', () => {
    const found = propose({
      toDose: (control) => 20 - control,
      oscillates: 'below',
      onset: { interval: { value: 10, low: 8.36, high: 11.64 } },
    });
    expect(onset(found)[1]).toBeCloseTo(10, 1);
    // Thresholds of Max 1960 for a normal of sd 1 (99 quantiles stand for it here).
    expect(onset(found)[2]! - onset(found)[1]!).toBeCloseTo(0.98, 1);
    expect(found.levels[0]!.purpose).toBe('far side');
  });

  it('say which share no dose reaches, and give nothing when none does', () => {
    const partly = propose({ toDose: (c) => (c < 10 ? c : null) });
    expect(partly.unreachable).toBeCloseTo(0.5, 2);
    expect(partly.notes.map((n) => n.code)).toContain('dose-unreachable');
    expect(propose({ toDose: () => null })).toMatchObject({ levels: [], unreachable: 1 });
  });

  it('stay within the approval, and ask for a new one where it leaves nothing', () => {
    const narrow = propose({ envelope: { ...envelope, doseHigh: 9 } });
    expect(narrow.levels.every((l) => l.dose <= 9)).toBe(true);
    expect(narrow.notes.map((n) => n.code)).toContain('outside-envelope');
    const none = propose({ range: [10, 20], envelope: { ...envelope, doseHigh: 9 } });
    expect(none.levels).toEqual([]);
    expect(none.notes[0]!.code).toBe('outside-envelope');
  });

  it('never leave the approval: 200 random situations', () => {
    const random = randomSource(4);
    const orders = ['ascending', 'descending', 'both', 'randomised'] as const;
    for (let round = 0; round < 200; round += 1) {
      const approved = {
        doseLow: 5 * random.uniform(),
        doseHigh: 10 + 10 * random.uniform(),
        ceiling: random.uniform() < 0.5 ? 8 + 12 * random.uniform() : null,
        largestStep: random.uniform() < 0.5 ? 0.5 + 4 * random.uniform() : null,
      };
      const order = orders[random.below(4)]!;
      const start = approved.doseLow + 4 * random.uniform();
      const done = Array.from({ length: random.below(6) }, () => ({
        dose: 20 * random.uniform(),
        verdict: (['steady', 'sustained', 'undecided'] as const)[random.below(3)]!,
      }));
      const found = propose({ envelope: approved, order, done, limits: { start }, seed: round });
      const stepped = order !== 'randomised';
      expect(withinEnvelope(found.levels, approved, start, stepped)).toEqual({ ok: true });
      if (found.levels.length === 0) expect(found.notes.length).toBeGreaterThan(0);
    }
  });
});

describe('the belief', () => {
  it('keeps the middle and the 90 % ends of an observed interval, uneven ones too', () => {
    const values = controlDraws({ interval: { value: 5, low: 4, high: 8 } });
    expect(values[49]).toBeCloseTo(5, 9);
    expect(values.filter((x) => x < 4).length / 99).toBeCloseTo(0.05, 1);
    expect(values.filter((x) => x > 8).length / 99).toBeCloseTo(0.05, 1);
    expect(controlDraws({ values: [1, 2] })).toEqual([1, 2]);
  });
});

describe('an approved envelope', () => {
  const approved = { doseLow: 1, doseHigh: 10, ceiling: 9, largestStep: 2 };
  const levels = (...doses: number[]) => doses.map((dose) => ({ dose }));

  it('covers levels inside it, falls of any size included', () => {
    expect(withinEnvelope(levels(1, 3, 5, 7, 9, 1), approved)).toEqual({ ok: true });
    expect(withinEnvelope([], approved)).toEqual({ ok: true });
  });

  it('allows for rounding in a step, not for more', () => {
    const tenths = { ...approved, doseLow: 0, largestStep: 0.1 };
    expect(withinEnvelope(levels(0.7, 0.8), tenths)).toEqual({ ok: true });
    expect(withinEnvelope(levels(0.7, 0.8001), tenths).ok).toBe(false);
  });

  it('names each breach and where it is', () => {
    const found = withinEnvelope(levels(0.5, 3, 11), approved);
    expect(found.ok).toBe(false);
    if (found.ok) return;
    expect(found.breaches.map((b) => b.where)).toEqual([
      'level 1',
      'level 2',
      'level 3',
      'level 3',
      'level 3',
    ]);
    expect(found.breaches[1]!.text).toBe(
      'The rise from 0.5 to 3 exceeds the largest approved step, 2.',
    );
  });

  it('counts the first rise from the dose in force, and none between fresh preparations', () => {
    expect(withinEnvelope(levels(5), approved, 1).ok).toBe(false);
    expect(withinEnvelope(levels(5), approved).ok).toBe(true);
    expect(withinEnvelope(levels(1, 9), approved, 1, false).ok).toBe(true);
  });

  it('lets no dose pass that is not a number', () => {
    expect(withinEnvelope(levels(Number.NaN), approved).ok).toBe(false);
  });
});
