import { and, eq, inArray } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { latestPrediction } from '@/db/queries/predictions';
import { runsWithReadings, standingVerdict, verdictsOfRuns } from '@/db/queries/readings';
import { level } from '@/db/schema';
import type { JudgeAnswer } from '@/lib/contracts';
import { doseToControl } from '@/lib/sim/dose-map';
import type { EvidencePlan, EvidenceRun } from './plan';
import { pointsEach, recordToJudge } from './record-to-judge';

type Of = { labId: string; studyId: string };
type Run = Awaited<ReturnType<typeof runsWithReadings>>[number];
type Prediction = NonNullable<Awaited<ReturnType<typeof latestPrediction>>>;
type Verdicts = Awaited<ReturnType<typeof verdictsOfRuns>>;

const COUNTED = new Set(['settling', 'recording', 'recorded', 'suspended', 'lost']);

const intervals = (answer: JudgeAnswer | null) => ({
  ...(answer?.amplitude ? { amplitude: answer.amplitude } : {}),
  ...(answer?.growthRate ? { growthRate: answer.growthRate } : {}),
});

async function settlingOf(conn: Conn, of: Of, runs: Run[]): Promise<Map<string, number>> {
  if (runs.length === 0) return new Map();
  const ids = [...new Set(runs.map((r) => r.levelId))];
  const rows = await conn
    .select({ id: level.id, settleMinutes: level.settleMinutes })
    .from(level)
    .where(and(eq(level.labId, of.labId), inArray(level.id, ids)));
  return new Map(rows.map((r) => [r.id, r.settleMinutes]));
}

async function evidenceRun(
  conn: Conn,
  of: Of & { most: number; settleMinutes: number },
  run: Run,
  prediction: Prediction,
  verdicts: Verdicts,
): Promise<EvidenceRun | null> {
  const { model, control: axis } = prediction.request;
  const record = await recordToJudge(
    conn,
    { labId: of.labId, run: { id: run.id, settleMinutes: of.settleMinutes }, most: of.most },
    { model, answer: prediction.answer },
  );
  const { verdict, standing, computed } = standingVerdict(
    verdicts.filter((v) => v.runId === run.id),
  );
  if (!record && !verdict) return null;
  // What was delivered counts, not what was planned.
  const control = doseToControl(axis.doseMap, run.deliveredDose ?? run.dose) ?? run.control;
  return {
    runId: run.id,
    readout: record?.readout ?? null,
    judge: record?.judge ?? null,
    said: record?.said ?? [],
    fixed: standing !== null && standing.kind !== 'computed',
    level: {
      control,
      preparation: run.preparation,
      ...(run.direction ? { direction: run.direction } : {}),
      ...(verdict ? { verdict } : {}),
      ...intervals(computed?.answer ?? standing?.answer ?? null),
    },
  };
}

/** Everything that verdicts and the observed onset of a study are worked out from. */
export async function buildEvidence(conn: Conn, of: Of): Promise<EvidencePlan | null> {
  const prediction = await latestPrediction(conn, of);
  if (!prediction) return null;
  const runs = (await runsWithReadings(conn, of)).filter((r) => COUNTED.has(r.state));
  const verdicts = await verdictsOfRuns(conn, { labId: of.labId, runIds: runs.map((r) => r.id) });
  const settling = await settlingOf(conn, of, runs);
  const most = pointsEach(runs.filter((r) => r.readings > 0).length);
  const found: EvidenceRun[] = [];
  for (const r of runs) {
    const wanted = { ...of, most, settleMinutes: settling.get(r.levelId) ?? 0 };
    const evidence = await evidenceRun(conn, wanted, r, prediction, verdicts);
    if (evidence) found.push(evidence);
  }
  if (found.length === 0) return null;
  const targets = prediction.answer.onsets.map((o) => ({
    oscillates: o.oscillates,
    predicted: o.spread?.values.length
      ? { values: o.spread.values }
      : { mean: o.value, sd: Math.abs(o.value) * 1e-6 },
  }));
  return {
    studyId: of.studyId,
    predictionId: prediction.id,
    runs: found,
    targets: targets.length > 0 ? targets : [{}],
  };
}
