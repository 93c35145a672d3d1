import { eq } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { recordOfRun } from '@/db/queries/records';
import { level } from '@/db/schema';
import type { SystemModel } from '@/lib/contracts';
import { durationText } from '@/lib/format';
import { minutesPerUnit } from '@/lib/planner/cadence/time-unit';
import { readoutOf } from './record-to-judge';

/** Points that a chart can still tell apart. */
const CHART_POINTS = 1500;

export type RunRecord = {
  chart: {
    times: number[];
    values: (number | null)[];
    unit: string;
    label: string;
    from?: number;
  };
  said: string;
};

/** A run's readings as its chart shows them, in model time; null while there are none. */
export async function runRecord(
  conn: Conn,
  of: { labId: string; runId: string; levelId: string },
  model: SystemModel,
): Promise<RunRecord | null> {
  const chosen = await readoutOf(conn, of, model);
  if (!chosen) return null;
  const { readout, count } = chosen;
  const points = await recordOfRun(conn, { ...of, readout, count, most: CHART_POINTS });
  const [planned] = await conn
    .select({ settleMinutes: level.settleMinutes })
    .from(level)
    .where(eq(level.id, of.levelId));
  const perUnit = minutesPerUnit(model.timeUnit);
  const settle = planned?.settleMinutes ?? 0;
  const named =
    model.readouts?.find((r) => r.symbol === readout) ??
    model.variables.find((v) => v.symbol === readout);
  const missing = points.values.filter((v) => v === null).length;
  const said = [
    `${count} ${count === 1 ? 'reading' : 'readings'} of ${readout}`,
    points.each > 1 ? `each point is the mean of ${points.each} in succession` : '',
    missing > 0 ? `${missing} without a value` : '',
    settle > 0 ? `shaded: settling, ${durationText(settle)}, which does not count` : '',
  ];
  return {
    chart: {
      times: points.minutes.map((m) => m / perUnit),
      values: points.values,
      unit: named?.unit ?? '',
      label: readout,
      ...(settle > 0 ? { from: settle / perUnit } : {}),
    },
    said: `${said.filter(Boolean).join('; ')}.`,
  };
}
