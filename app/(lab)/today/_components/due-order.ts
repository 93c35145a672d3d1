export type DueState = 'planned' | 'started' | 'done' | 'missed' | 'suspended' | 'cancelled';
type Timed = { from: string; to: string; state: DueState };

/** Still to be done, its time gone by. Instants are ISO 8601 in UTC. */
export function isOverdue(row: Timed, now: string): boolean {
  return (row.state === 'planned' || row.state === 'missed') && row.to <= now;
}

const open = (row: Timed) => row.state !== 'done' && row.state !== 'cancelled';

/**
 * The day in three lists: what is due (overdue first, then by time; all that has begun), what comes on later days, what
 * is done today. `dayEnd` is the end of the lab's day.
 */
export function sortDue<Row extends Timed>(
  rows: readonly Row[],
  of: { now: string; dayStart: string; dayEnd: string },
): { due: Row[]; coming: Row[]; done: Row[] } {
  const byTime = [...rows].sort((a, b) => a.from.localeCompare(b.from));
  const due = byTime.filter((r) => open(r) && (r.from < of.dayEnd || r.state === 'started'));
  return {
    due: [...due.filter((r) => isOverdue(r, of.now)), ...due.filter((r) => !isOverdue(r, of.now))],
    coming: byTime.filter((r) => open(r) && !due.includes(r)),
    done: byTime.filter((r) => r.state === 'done' && r.to > of.dayStart && r.from < of.dayEnd),
  };
}

const HOUR = 60;
const DAY = 24 * HOUR;

/** "day 3, hour 79 since dose": counted from the setting, as on the bench card. */
export function sinceDoseText(minutes: number): string {
  if (minutes < 1) return 'sets the dose';
  if (minutes < HOUR) return `${Math.round(minutes)} min since dose`;
  return `day ${Math.floor(minutes / DAY)}, hour ${Math.floor(minutes / HOUR)} since dose`;
}
