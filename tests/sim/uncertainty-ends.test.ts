import { describe, expect, it } from 'vitest';
import { expectedEnds } from '@/lib/sim/uncertainty/end-states';
import { matchOnsets } from '@/lib/sim/uncertainty/match-onsets';

const above = (value: number) => ({ value, oscillates: 'above' as const });
const below = (value: number) => ({ value, oscillates: 'below' as const });

describe('what the ends of the range must show when an onset has left it', () => {
  it('follows from the onsets inside, else from the nearest outside', () => {
    expect(expectedEnds([above(0.5)], 0, 1)).toEqual({ from: true, to: false });
    expect(expectedEnds([above(0.3), below(0.7)], 0, 1)).toEqual({ from: true, to: true });
    expect(expectedEnds([above(-1), below(0.7)], 0, 1)).toEqual({ from: false, to: true });
    expect(expectedEnds([above(0.3), below(2)], 0, 1)).toEqual({ from: true, to: false });
    expect(expectedEnds([above(2)], 0, 1)).toEqual({ from: true, to: true });
    expect(expectedEnds([below(2)], 0, 1)).toEqual({ from: false, to: false });
    expect(expectedEnds([above(-1)], 0, 1)).toEqual({ from: false, to: false });
    expect(expectedEnds([above(-1), below(2)], 0, 1)).toEqual({ from: false, to: false });
    expect(expectedEnds([below(-1), above(2)], 0, 1)).toEqual({ from: true, to: true });
  });

  it('says nothing where two neighbouring onsets have the same side', () => {
    expect(expectedEnds([above(0.2), above(0.6)], 0, 1)).toBeNull();
  });
});

describe('draws and nominal onsets', () => {
  it('go together by side and order', () => {
    const up = (control: number) => ({ control, growthSlope: 1 });
    const down = (control: number) => ({ control, growthSlope: -1 });
    const nominal = [up(1), down(2), up(3)];
    expect(matchOnsets(nominal, [up(1.1), down(2.1), up(3.1)])).toEqual([1.1, 2.1, 3.1]);
    expect(matchOnsets(nominal, [down(2.1)])).toEqual([null, 2.1, null]);
    expect(matchOnsets(nominal, [up(3.1)])).toEqual([3.1, null, null]);
    expect(matchOnsets(nominal, [])).toEqual([null, null, null]);
  });
});
