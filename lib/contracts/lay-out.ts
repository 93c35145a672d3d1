import { z } from 'zod';
import { finite, nonNegative, positive } from './common';

/** ISO 8601 with an offset or Z. */
export const instant = z.iso.datetime({ offset: true });
const id = z.string().min(1).max(200);
export const clockTime = z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'write the time as HH:MM');

export const hours = z.strictObject({
  rrule: z.string().min(1).max(500),
  from: clockTime,
  to: clockTime,
});
export type Hours = z.infer<typeof hours>;

export const attended = z.strictObject({
  at: nonNegative,
  minutes: positive,
  late: nonNegative.default(0),
  people: z.number().int().min(1).max(20).default(1),
  round: z.string().max(200).optional(),
});
export type Attended = z.infer<typeof attended>;

export const bookingRequest = z.strictObject({
  id,
  minutes: positive,
  attended: z.array(attended).max(2000),
  rigs: z.array(id).min(1),
  sameRigAs: id.optional(),
  skills: z.array(z.string()).optional(),
  after: z
    .array(z.strictObject({ id, gapMin: nonNegative, gapMax: nonNegative.optional() }))
    .optional(),
  weight: nonNegative.optional(),
});
export type BookingRequest = z.infer<typeof bookingRequest>;

const span = { from: instant, to: instant };
export const layOutRig = z.strictObject({
  id,
  capacity: z.number().int().min(1).default(1),
  open: z.array(hours).optional(),
});
export type LayOutRig = z.infer<typeof layOutRig>;
export const layOutPerson = z.strictObject({
  id,
  skills: z.array(z.string()).optional(),
  hours: z.array(hours),
  away: z.array(z.strictObject(span)).optional(),
  maxMinutesPerDay: positive.optional(),
  minRestHours: nonNegative.optional(),
});
export type LayOutPerson = z.infer<typeof layOutPerson>;

export const layOutRequest = z.strictObject({
  timeZone: z.string().min(1),
  notBefore: instant,
  notAfter: instant,
  bookings: z.array(bookingRequest).max(5000),
  rigs: z.array(layOutRig),
  people: z.array(layOutPerson),
  closed: z.array(z.strictObject(span)).optional(),
  busy: z.array(z.strictObject({ rig: id.optional(), person: id.optional(), ...span })).optional(),
  seed: z.number().int().min(0).default(1),
  effort: z.number().int().min(0).max(1_000_000).default(2000),
});
export type LayOutRequest = z.infer<typeof layOutRequest>;

export const placement = z.strictObject({
  booking: id,
  start: instant,
  end: instant,
  rig: id,
  attendance: z.array(z.strictObject({ person: id, ...span })),
});
export type Placement = z.infer<typeof placement>;
export const layOutAnswer = z.strictObject({
  placements: z.array(placement),
  unplaced: z.array(z.strictObject({ booking: id, reason: z.string() })),
  finish: instant.nullable(),
  cost: z.array(finite),
});
export type LayOutAnswer = z.infer<typeof layOutAnswer>;
