import { describe, expect, it } from 'vitest';
import { checkLayOut } from '@/lib/planner/lay-out/check';
import { layOut } from '@/lib/planner/lay-out/lay-out';
import { PLACES, randomRequest } from './lay-out-instances';

describe('every lay-out keeps every hard rule, in two zones and across both clock changes', () => {
  for (const place of PLACES) {
    it(`${place.timeZone} from ${place.notBefore}`, () => {
      let placed = 0;
      for (let seed = 1; seed <= 60; seed++) {
        const asked = randomRequest(seed, place);
        const answer = layOut(asked);
        placed += answer.placements.length;
        expect({ seed, broken: checkLayOut(asked, answer) }).toEqual({ seed, broken: [] });
        for (const u of answer.unplaced) expect(u.reason.length).toBeGreaterThan(20);
      }
      // A planner that places nothing would keep every rule too.
      expect(placed).toBeGreaterThan(150);
    });
  }
});

describe('the same request and seed', () => {
  it('give the same answer to the last character', () => {
    for (let seed = 1; seed <= 10; seed++) {
      const asked = randomRequest(seed, PLACES[0]!, 200);
      expect(JSON.stringify(layOut(asked))).toBe(JSON.stringify(layOut(asked)));
    }
  });
});

describe('improvement', () => {
  it('never ends worse than the greedy plans, and helps somewhere', () => {
    let better = 0;
    for (let seed = 1; seed <= 40; seed++) {
      const plain = layOut(randomRequest(seed, PLACES[4]!, 0)).cost;
      const improved = layOut(randomRequest(seed, PLACES[4]!, 300)).cost;
      const rank = plain.findIndex((c, i) => Math.abs(c - improved[i]!) > 1e-6);
      if (rank < 0) continue;
      expect({ seed, rank, less: improved[rank]! < plain[rank]! }).toEqual({
        seed,
        rank,
        less: true,
      });
      better++;
    }
    expect(better).toBeGreaterThan(5);
  });
});
