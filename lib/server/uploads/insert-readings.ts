import { and, eq, inArray, sql } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Transaction } from '@/db/client';
import { type RowProblem, reading } from '@/db/schema';
import type { TimedReading } from './import-file';

type Of = {
  labId: string;
  runId: string;
  uploadId: string;
  byId: string;
  now: Date;
  rows: TimedReading[];
};

/** Rows of one statement: about 250 kB, well below what a packet holds. */
const BATCH = 2500;

const placeOf = (r: Pick<TimedReading, 'readout' | 'minutes'>) => `${r.readout}\u0000${r.minutes}`;
const saidBy = (r: Pick<TimedReading, 'value' | 'state'>) =>
  r.state === 'value' ? String(r.value) : r.state;

/** What the run has already, of the readouts that the file speaks of: place → what it says. */
async function knownReadings(tx: Transaction, of: Of): Promise<Map<string, string>> {
  const rows = await tx
    .select({
      readout: reading.readout,
      minutes: reading.minutes,
      value: reading.value,
      state: reading.state,
    })
    .from(reading)
    .where(
      and(
        eq(reading.labId, of.labId),
        eq(reading.runId, of.runId),
        inArray(reading.readout, [...new Set(of.rows.map((r) => r.readout))]),
      ),
    );
  return new Map(rows.map((r) => [placeOf(r), saidBy(r)]));
}

/** Rows that are new, how many the run had already, and those that contradict what it has. */
function sortOut(rows: TimedReading[], known: Map<string, string>) {
  if (known.size === 0) return { fresh: rows, same: 0, problems: [] };
  const fresh: TimedReading[] = [];
  const problems: RowProblem[] = [];
  let same = 0;
  for (const r of rows) {
    const before = known.get(placeOf(r));
    if (before === undefined) fresh.push(r);
    else if (before === saidBy(r)) same += 1;
    else {
      problems.push({
        row: r.row,
        column: r.readout,
        text: saidBy(r),
        reason: `The run holds ${before} of ${r.readout} at this time already.`,
        mend: 'Correct the time or leave the row out; a reading is never written over.',
      });
    }
  }
  return { fresh, same, problems };
}

/** One statement with its rows as one JSON table: a long list of placeholders takes far longer to build. */
async function insertBatch(tx: Transaction, of: Of, rows: TimedReading[]): Promise<void> {
  const table = JSON.stringify(
    rows.map((r) => [uuid(), r.readout, r.minutes, r.value, r.state, r.row]),
  );
  await tx.execute(sql`
    insert into ${reading}
      (id, lab_id, run_id, readout, minutes, value, state, upload_id, file_row, by_id, created_at)
    select j.id, ${of.labId}, ${of.runId}, j.readout, j.minutes, j.value, j.state, ${of.uploadId},
      j.file_row, ${of.byId}, ${instantText(of.now)}
    from json_table(${table}, '$[*]' columns (
      id char(36) path '$[0]', readout varchar(64) path '$[1]', minutes double path '$[2]',
      value double path '$[3]', state varchar(20) path '$[4]', file_row int path '$[5]')) as j`);
}

/** An instant in UTC as the database writes it. */
const instantText = (at: Date) => at.toISOString().replace('T', ' ').replace('Z', '');

/**
 * Inserts the readings that the run does not have yet. The same readout, time and value is the same
 * reading, so that a longer copy of a file adds only what is new.
 */
export async function insertReadings(
  tx: Transaction,
  of: Of,
): Promise<{ kept: number; known: number; problems: RowProblem[] }> {
  const { fresh, same, problems } = sortOut(of.rows, await knownReadings(tx, of));
  for (let i = 0; i < fresh.length; i += BATCH) {
    await insertBatch(tx, of, fresh.slice(i, i + BATCH));
  }
  return { kept: fresh.length, known: same, problems };
}
