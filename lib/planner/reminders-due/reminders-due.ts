/**
 * Which reminders a session owes, as rows for an outbox. Pure: the clock is an argument. Offsets
 * are elapsed time before the start (24 h stays 24 h across a change of clocks).
 */
const MINUTE = 60_000;

/** One day and one hour before. */
export const DEFAULT_OFFSETS_MINUTES: readonly number[] = [1440, 60];
/** A reminder this much overdue is still sent; later it would only confuse. */
export const DEFAULT_GRACE_MINUTES = 15;

export type SessionState = 'planned' | 'started' | 'done' | 'missed' | 'suspended' | 'cancelled';
export type RemindedSession = {
  id: string;
  /** ISO 8601 with an offset. */
  startsAt: string;
  /** Rises with every change of time, place or people. */
  sequence: number;
  personIds: readonly string[];
  state?: SessionState;
};

/** What one person asked for; left out: the defaults. No offsets: no reminders. */
export type ReminderPreference = { offsetsMinutes?: readonly number[] };
export type ReminderPreferences = {
  offsetsMinutes?: readonly number[];
  byPerson?: Readonly<Record<string, ReminderPreference>>;
  graceMinutes?: number;
};

export type Reminder = {
  /** Unique: `session:recipient:offset:sequence`, the offset in minutes. */
  key: string;
  session: string;
  recipient: string;
  offsetMinutes: number;
  sequence: number;
  /** UTC, ISO 8601. */
  dueAt: string;
  startsAt: string;
};

function readTime(iso: string | Date, what: string): number {
  const ms = typeof iso === 'string' ? Date.parse(iso) : iso.getTime();
  if (!Number.isFinite(ms)) throw new RangeError(`${what} is no moment in time: ${String(iso)}`);
  return ms;
}

const isWaiting = (session: RemindedSession) => (session.state ?? 'planned') === 'planned';

function offsetsOf(preferences: ReminderPreferences, person: string): number[] {
  const own = preferences.byPerson?.[person]?.offsetsMinutes;
  const offsets = own ?? preferences.offsetsMinutes ?? DEFAULT_OFFSETS_MINUTES;
  for (const o of offsets) {
    if (!Number.isFinite(o) || o < 0)
      throw new RangeError(`A reminder ${o} minutes before is none.`);
  }
  return [...new Set(offsets)].sort((a, b) => b - a);
}

/**
 * The reminders still to be sent for a session, earliest first. None whose time has passed by more
 * than the grace, none once the session has begun, none unless it is *planned*.
 */
export function remindersFor(
  session: RemindedSession,
  preferences: ReminderPreferences,
  now: string | Date,
): Reminder[] {
  const clock = readTime(now, 'now');
  const start = readTime(session.startsAt, 'startsAt');
  if (!isWaiting(session) || start <= clock) return [];
  const oldest = clock - (preferences.graceMinutes ?? DEFAULT_GRACE_MINUTES) * MINUTE;
  const rows = [...new Set(session.personIds)].flatMap((recipient) =>
    offsetsOf(preferences, recipient).map((offset) => ({
      key: `${session.id}:${recipient}:${offset}:${session.sequence}`,
      session: session.id,
      recipient,
      offsetMinutes: offset,
      sequence: session.sequence,
      dueAt: new Date(start - offset * MINUTE).toISOString(),
      startsAt: new Date(start).toISOString(),
    })),
  );
  return rows
    .filter((r) => Date.parse(r.dueAt) >= oldest)
    .sort((a, b) => a.dueAt.localeCompare(b.dueAt) || a.key.localeCompare(b.key));
}

/**
 * Keys of unsent rows that must not be sent any more: the session was cancelled, suspended, begun
 * or is gone, it was moved since (another sequence), or the person no longer belongs to it.
 */
export function cancelledReminders(
  unsent: readonly Reminder[],
  sessions: readonly RemindedSession[],
): string[] {
  const byId = new Map(sessions.map((s) => [s.id, s]));
  return unsent
    .filter((row) => {
      const session = byId.get(row.session);
      return !(
        session &&
        isWaiting(session) &&
        session.sequence === row.sequence &&
        session.personIds.includes(row.recipient)
      );
    })
    .map((row) => row.key);
}

export type MissedDigest = {
  /** Made from its newest row, so that the same set gives the same key and a later one another. */
  key: string;
  recipient: string;
  /** Sessions of the missed reminders that are still to come, soonest first. */
  coming: { session: string; startsAt: string }[];
  /** Sessions that began while no mail could be sent. */
  begun: { session: string; startsAt: string }[];
  /** The rows that this digest stands for: mark them expired, never send them singly. */
  covers: string[];
};

/**
 * After a time without mail: one digest a person for all unsent rows that are overdue by more than
 * the grace. Rows within the grace are left to be sent as usual.
 */
export function digestOfMissed(
  unsent: readonly Reminder[],
  now: string | Date,
  graceMinutes = DEFAULT_GRACE_MINUTES,
): MissedDigest[] {
  const clock = readTime(now, 'now');
  const missed = unsent
    .filter((r) => readTime(r.dueAt, 'dueAt') < clock - graceMinutes * MINUTE)
    .sort((a, b) => a.dueAt.localeCompare(b.dueAt) || a.key.localeCompare(b.key));
  const people = [...new Set(missed.map((r) => r.recipient))].sort();
  return people.map((recipient) => {
    const rows = missed.filter((r) => r.recipient === recipient);
    const starts = new Map(rows.map((r) => [r.session, r.startsAt]));
    const list = [...starts]
      .map(([session, startsAt]) => ({ session, startsAt }))
      .sort((a, b) => a.startsAt.localeCompare(b.startsAt) || a.session.localeCompare(b.session));
    return {
      key: `missed:${recipient}:${rows[rows.length - 1]!.key}`,
      recipient,
      coming: list.filter((s) => Date.parse(s.startsAt) > clock),
      begun: list.filter((s) => Date.parse(s.startsAt) <= clock),
      covers: rows.map((r) => r.key),
    };
  });
}
