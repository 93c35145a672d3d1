import type { Conn } from '@/db/client';
import { standingStops } from '@/db/queries/stops';

/**
 * Why some of these runs may not be laid out: a stop stands over them, and only the head lifts it.
 * Null when none does. A new version of the series or a new preparation is no way around a stop.
 */
export async function heldByStop(
  conn: Conn,
  of: { labId: string; studyId: string; runs: { preparationId: string; dose: number }[] },
): Promise<string | null> {
  for (const { stop, by } of await standingStops(conn, of)) {
    const covers = (r: { preparationId: string; dose: number }) =>
      stop.wholeStudy === 1 ||
      r.preparationId === stop.preparationId ||
      (stop.dose !== null && r.dose >= stop.dose);
    if (of.runs.some(covers)) return `A stop that ${by} pressed stands over these runs.`;
  }
  return null;
}
