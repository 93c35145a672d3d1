import { expect } from 'vitest';
import type { z } from 'zod';
import { layOutAnswer, type layOutRequest } from '@/lib/contracts/lay-out';
import { checkLayOut } from '@/lib/planner/lay-out/check';
import { layOut } from '@/lib/planner/lay-out/lay-out';
import { DAILY, request } from './lay-out-instances';

export type Input = z.input<typeof layOutRequest>;
/** One rig, one person, a week from Tuesday 1 December 2026, 08:00 in Berlin. */
export const week = (over: Partial<Input>): Input => ({
  timeZone: 'Europe/Berlin',
  notBefore: '2026-12-01T08:00:00+01:00',
  notAfter: '2026-12-08T08:00:00+01:00',
  bookings: [],
  rigs: [{ id: 'rig' }],
  people: [{ id: 'mira', hours: [DAILY] }],
  effort: 200,
  ...over,
});

/** Lays out, and lets the independent checker look at the answer. */
export function run(input: Input) {
  const asked = request(input);
  const answer = layOutAnswer.parse(layOut(asked));
  expect(checkLayOut(asked, answer)).toEqual([]);
  return answer;
}
