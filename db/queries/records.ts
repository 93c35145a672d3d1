import { and, count, eq, sql } from 'drizzle-orm';
import type { Conn } from '../client';
import { reading } from '../schema';

type OfRun = { labId: string; runId: string };

/** Which readouts a run has readings of, and how many of each. */
export async function readoutsOfRun(conn: Conn, of: OfRun) {
  return conn
    .select({ readout: reading.readout, count: count() })
    .from(reading)
    .where(and(eq(reading.labId, of.labId), eq(reading.runId, of.runId)))
    .groupBy(reading.readout)
    .orderBy(reading.readout);
}

/** `each`: how many readings in succession one point is the mean of; 1 = the readings themselves. */
export type RecordPoints = { minutes: number[]; values: (number | null)[]; each: number };

/**
 * One run's readings of one readout in order of time, in at most `most` points: where there are more,
 * each point is the mean of as many readings in succession as it takes. A reading without a value
 * counts in neither mean; a point of such readings alone has none.
 */
export async function recordOfRun(
  conn: Conn,
  of: OfRun & { readout: string; count: number; most: number },
): Promise<RecordPoints> {
  const each = Math.max(1, Math.ceil(of.count / of.most));
  const own = and(
    eq(reading.labId, of.labId),
    eq(reading.runId, of.runId),
    eq(reading.readout, of.readout),
  );
  const value = sql<number | null>`case when ${reading.state} = 'value' then ${reading.value} end`;
  if (each === 1) {
    const rows = await conn
      .select({ minutes: reading.minutes, value })
      .from(reading)
      .where(own)
      .orderBy(reading.minutes, reading.id);
    return { minutes: rows.map((r) => r.minutes), values: rows.map((r) => r.value), each };
  }
  const numbered = conn
    .select({
      minutes: reading.minutes,
      value: value.as('own_value'),
      bin: sql<number>`floor((row_number() over (order by ${reading.minutes}, ${reading.id}) - 1) / ${each})`.as(
        'bin',
      ),
    })
    .from(reading)
    .where(own)
    .as('numbered');
  const rows = await conn
    .select({
      minutes:
        sql<number>`coalesce(avg(case when ${numbered.value} is not null then ${numbered.minutes} end), avg(${numbered.minutes}))`.mapWith(
          Number,
        ),
      value: sql<number | null>`avg(${numbered.value})`,
    })
    .from(numbered)
    .groupBy(numbered.bin)
    .orderBy(numbered.bin);
  return { minutes: rows.map((r) => r.minutes), values: rows.map((r) => r.value), each };
}
