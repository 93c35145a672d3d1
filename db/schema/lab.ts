import { boolean, index, int, mysqlTable, uniqueIndex, varchar } from 'drizzle-orm/mysql-core';
import { createdAt, id, instant, primaryId, shape } from './columns';

export const roles = ['head', 'investigator', 'technician', 'observer'] as const;
export type Role = (typeof roles)[number];

export const lab = mysqlTable('lab', {
  id: primaryId(),
  name: varchar('name', { length: 200 }).notNull(),
  place: varchar('place', { length: 100 }).notNull(),
  timeZone: varchar('time_zone', { length: 64 }).notNull(),
  /** The lab of the invented demo data. */
  demo: boolean('demo').notNull().default(false),
  createdAt: createdAt(),
});

export const user = mysqlTable(
  'user',
  {
    id: primaryId(),
    email: varchar('email', { length: 254 }).notNull(),
    name: varchar('name', { length: 120 }).notNull(),
    passwordHash: varchar('password_hash', { length: 200 }).notNull(),
    /** Raised to end every session of this user at once. */
    sessionVersion: int('session_version').notNull().default(1),
    createdAt: createdAt(),
  },
  (t) => [uniqueIndex('user_email').on(t.email)],
);

export const membership = mysqlTable(
  'membership',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    userId: id('user_id')
      .notNull()
      .references(() => user.id),
    role: varchar('role', { length: 20 }).$type<Role>().notNull(),
    skills: shape<string[]>('skills').notNull(),
    maxMinutesPerDay: int('max_minutes_per_day'),
    minRestHours: int('min_rest_hours'),
    active: boolean('active').notNull().default(true),
    createdAt: createdAt(),
  },
  (t) => [uniqueIndex('membership_lab_user').on(t.labId, t.userId)],
);

/** Working hours of a person or opening hours of a rig: an RFC 5545 recurrence in the lab's zone. */
export const workingHours = mysqlTable(
  'working_hours',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    userId: id('user_id').references(() => user.id),
    rigId: id('rig_id'),
    rrule: varchar('rrule', { length: 500 }).notNull(),
    from: varchar('from_time', { length: 5 }).notNull(),
    to: varchar('to_time', { length: 5 }).notNull(),
    createdAt: createdAt(),
  },
  (t) => [index('working_hours_lab').on(t.labId)],
);

/** A person's absence (userId set) or a closure of the whole lab (userId null). */
export const absence = mysqlTable(
  'absence',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    userId: id('user_id').references(() => user.id),
    from: instant('from_at').notNull(),
    to: instant('to_at').notNull(),
    reason: varchar('reason', { length: 200 }).notNull(),
    createdAt: createdAt(),
  },
  (t) => [index('absence_lab_from').on(t.labId, t.from)],
);

export const rig = mysqlTable(
  'rig',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    name: varchar('name', { length: 120 }).notNull(),
    place: varchar('place', { length: 120 }).notNull(),
    capacity: int('capacity').notNull().default(1),
    /** Skills that a person needs to attend here. */
    skills: shape<string[]>('skills').notNull(),
    /** The rig records by itself; a person sets the dose and collects the record. */
    recordsItself: boolean('records_itself').notNull().default(false),
    retired: boolean('retired').notNull().default(false),
    createdAt: createdAt(),
  },
  (t) => [uniqueIndex('rig_lab_name').on(t.labId, t.name)],
);
