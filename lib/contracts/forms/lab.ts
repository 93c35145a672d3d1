import { z } from 'zod';
import { clockTime } from '../lay-out';

const id = z.uuid();
const name = z.string().trim().min(1, 'give a name').max(120);
const skills = z.array(z.string().trim().min(1).max(60)).max(30);
export const newPassword = z
  .string()
  .min(12, 'a password has at least 12 characters')
  .max(200, 'a password has at most 200 characters');
export const role = z.enum(['head', 'investigator', 'technician', 'observer']);

export const personForm = z.strictObject({
  name,
  email: z.email('write an address like name@example.org').trim().toLowerCase().max(254),
  role,
  skills,
  password: newPassword,
});
export const membershipForm = z.strictObject({
  userId: id,
  role,
  skills,
  maxMinutesPerDay: z.number().int().positive().max(1440).nullable(),
  minRestHours: z.number().int().min(0).max(24).nullable(),
  active: z.boolean(),
});
export const passwordForm = z.strictObject({
  current: z.string().min(1, 'type the password you have now').max(200),
  next: newPassword,
});

export const rigForm = z.strictObject({
  rigId: id.nullable(),
  name,
  place: z.string().trim().min(1, 'say where it stands').max(120),
  capacity: z.number().int().min(1, 'at least one run at a time').max(500),
  skills,
  recordsItself: z.boolean(),
  retired: z.boolean(),
});

export const weekdays = ['MO', 'TU', 'WE', 'TH', 'FR', 'SA', 'SU'] as const;
export const hoursForm = z
  .strictObject({
    id,
    userId: id.nullable(),
    rigId: id.nullable(),
    days: z.array(z.enum(weekdays)).min(1, 'choose at least one day'),
    from: clockTime,
    to: clockTime,
  })
  .refine((f) => (f.userId === null) !== (f.rigId === null), 'hours belong to a person or a rig')
  .refine((f) => f.from !== f.to, { message: 'the hours end when they begin', path: ['to'] });

export const absenceForm = z
  .strictObject({
    id,
    /** null: the whole lab is closed. */
    userId: id.nullable(),
    from: z.iso.datetime({ offset: true }),
    to: z.iso.datetime({ offset: true }),
    reason: z.string().trim().min(1, 'say why, in a word or two').max(200),
  })
  .refine((f) => f.from < f.to, { message: 'it ends before it begins', path: ['to'] });
export const removeForm = z.strictObject({ id });
