import { inArray } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import {
  type RunVerdict,
  runsWithReadings,
  standingVerdict,
  verdictsOfRuns,
} from '@/db/queries/readings';
import { user } from '@/db/schema';
import type { Interval, Verdict } from '@/lib/contracts';

/** How a verdict came to be, as it is said beside it. */
export type VerdictWay = 'computed' | 'overruled' | 'published';

/** One run as the Readings and Onset pages show it. */
export type RunRow = {
  id: string;
  levelId: string;
  number: number;
  state: Awaited<ReturnType<typeof runsWithReadings>>[number]['state'];
  /** As delivered, once it was; as planned before. */
  dose: number;
  control: number;
  preparation: string;
  direction: 'up' | 'down' | null;
  setAt: Date | null;
  readings: number;
  verdict: Verdict | null;
  way: VerdictWay | null;
  verdictId: string | null;
  /** What was computed, whether or not it counts. */
  computed: RunVerdict | null;
  /** All that was ever said of it, the newest first, with who said it. */
  history: (RunVerdict & { byName: string | null })[];
  period: Interval | null;
  amplitude: Interval | null;
  growthRate: Interval | null;
  readout: string | null;
};

/** What a run is marked with: its verdict, else that it was lost or held; null while it is open. */
export function markOf({ verdict, state }: Pick<RunRow, 'verdict' | 'state'>) {
  if (verdict) return verdict;
  if (state === 'lost') return 'lost' as const;
  return state === 'suspended' ? ('stopped' as const) : null;
}

/** A study's runs in dose order with the verdicts that count; cancelled runs without readings left out. */
export async function runRows(
  conn: Conn,
  of: { labId: string; studyId: string },
): Promise<RunRow[]> {
  const runs = (await runsWithReadings(conn, of)).filter(
    (r) => r.state !== 'cancelled' || r.readings > 0,
  );
  const verdicts = await verdictsOfRuns(conn, { labId: of.labId, runIds: runs.map((r) => r.id) });
  const ids = [...new Set(verdicts.flatMap((v) => (v.byId ? [v.byId] : [])))];
  const names = ids.length
    ? await conn.select({ id: user.id, name: user.name }).from(user).where(inArray(user.id, ids))
    : [];
  const nameOf = new Map(names.map((n) => [n.id, n.name]));
  const rows = runs.map((r) => {
    const own = verdicts.filter((v) => v.runId === r.id);
    const { verdict, standing, computed } = standingVerdict(own);
    const answer = computed?.answer ?? standing?.answer ?? null;
    return {
      id: r.id,
      levelId: r.levelId,
      number: r.number,
      state: r.state,
      dose: r.deliveredDose ?? r.dose,
      control: r.control,
      preparation: r.preparation,
      direction: r.direction,
      setAt: r.setAt,
      readings: r.readings,
      verdict,
      way: standing?.kind ?? null,
      verdictId: standing?.id ?? null,
      computed,
      history: own.map((v) => ({ ...v, byName: v.byId ? (nameOf.get(v.byId) ?? null) : null })),
      period: answer?.period ?? null,
      amplitude: answer?.amplitude ?? null,
      growthRate: answer?.growthRate ?? null,
      readout: computed?.readout ?? standing?.readout ?? null,
    };
  });
  return rows.sort((a, b) => a.dose - b.dose || a.number - b.number);
}
