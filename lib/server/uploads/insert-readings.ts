import { and, eq, inArray } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Transaction } from '@/db/client';
import { reading } from '@/db/schema';

/** One reading of a file: its line, its readout, minutes since the setting. */
export type ImportedReading = {
  row: number;
  readout: string;
  minutes: number;
  value: number | null;
  state: 'value' | 'missing' | 'below limit';
};

type Of = {
  labId: string;
  runId: string;
  uploadId: string;
  byId: string;
  now: Date;
  rows: ImportedReading[];
};

/** Rows of one statement: about 700 kB, well below what a packet holds. */
const BATCH = 4000;

const keyOf = (r: Pick<ImportedReading, 'readout' | 'minutes' | 'value' | 'state'>) =>
  `${r.readout}\u0000${r.minutes}\u0000${r.value ?? r.state}`;

/** What the run has already, of the readouts that the file speaks of. */
async function knownKeys(tx: Transaction, of: Of): Promise<Set<string>> {
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
  return new Set(rows.map(keyOf));
}

/**
 * Inserts the readings that the run does not have yet. The same readout, time and value is the same
 * reading, so that a longer copy of a file adds only what is new.
 */
export async function insertReadings(
  tx: Transaction,
  of: Of,
): Promise<{ kept: number; known: number }> {
  const known = await knownKeys(tx, of);
  const fresh = known.size > 0 ? of.rows.filter((r) => !known.has(keyOf(r))) : of.rows;
  for (let i = 0; i < fresh.length; i += BATCH) {
    await tx.insert(reading).values(
      fresh.slice(i, i + BATCH).map((r) => ({
        id: uuid(),
        labId: of.labId,
        runId: of.runId,
        readout: r.readout,
        minutes: r.minutes,
        value: r.value,
        state: r.state,
        uploadId: of.uploadId,
        row: r.row,
        byId: of.byId,
        createdAt: of.now,
      })),
    );
  }
  return { kept: fresh.length, known: of.rows.length - fresh.length };
}
