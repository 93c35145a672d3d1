import type { Conn } from '@/db/client';
import { latestPrediction } from '@/db/queries/predictions';
import {
  readingsOfRun,
  runsWithReadings,
  standingVerdict,
  verdictsOfRuns,
} from '@/db/queries/readings';
import type { JudgeAnswer, JudgeRequest, PredictAnswer } from '@/lib/contracts';
import { minutesPerUnit } from '@/lib/planner/cadence/time-unit';
import { doseToControl } from '@/lib/sim/dose-map';
import type { EvidencePlan, EvidenceRun } from './plan';

type Of = { labId: string; studyId: string };
type Run = Awaited<ReturnType<typeof runsWithReadings>>[number];
type Prediction = NonNullable<Awaited<ReturnType<typeof latestPrediction>>>;

const COUNTED = new Set(['settling', 'recording', 'recorded', 'suspended', 'lost']);

/** The predicted periods around a run's control value, as a guide for its verdict. */
function expectedPeriod(answer: PredictAnswer): JudgeRequest['expectedPeriod'] {
  const periods = [
    ...answer.onsets.map((o) => o.period),
    ...answer.cycles.filter((c) => c.stable).map((c) => c.period),
  ];
  if (periods.length === 0) return undefined;
  return { low: Math.min(...periods) * 0.5, high: Math.max(...periods) * 2 };
}

async function recordOf(
  conn: Conn,
  of: Of,
  run: Run,
  prediction: Prediction,
): Promise<{ readout: string; judge: JudgeRequest } | null> {
  const rows = await readingsOfRun(conn, { labId: of.labId, runId: run.id });
  if (rows.length === 0) return null;
  const { model } = prediction.request;
  const declared = model.readouts?.map((r) => r.symbol) ?? model.variables.map((v) => v.symbol);
  const readout = declared.find((s) => rows.some((r) => r.readout === s)) ?? rows[0]!.readout;
  const perUnit = minutesPerUnit(model.timeUnit);
  const own = rows.filter((r) => r.readout === readout);
  const noiseSd = model.readouts?.find((r) => r.symbol === readout)?.noiseSd;
  const period = expectedPeriod(prediction.answer);
  return {
    readout,
    judge: {
      times: own.map((r) => r.minutes / perUnit),
      values: own.map((r) => (r.state === 'value' ? r.value : null)),
      ...(noiseSd ? { noiseSd } : {}),
      ...(period ? { expectedPeriod: period } : {}),
    },
  };
}

const intervals = (answer: JudgeAnswer | null) => ({
  ...(answer?.amplitude ? { amplitude: answer.amplitude } : {}),
  ...(answer?.growthRate ? { growthRate: answer.growthRate } : {}),
});

async function evidenceRun(
  conn: Conn,
  of: Of,
  run: Run,
  prediction: Prediction,
  verdicts: Awaited<ReturnType<typeof verdictsOfRuns>>,
): Promise<EvidenceRun | null> {
  const record = await recordOf(conn, of, run, prediction);
  const { verdict, standing, computed } = standingVerdict(
    verdicts.filter((v) => v.runId === run.id),
  );
  if (!record && !verdict) return null;
  // What was delivered counts, not what was planned.
  const map = prediction.request.control.doseMap;
  const control = doseToControl(map, run.deliveredDose ?? run.dose) ?? run.control;
  return {
    runId: run.id,
    readout: record?.readout ?? null,
    judge: record?.judge ?? null,
    fixed: standing !== null && standing.kind !== 'computed',
    level: {
      control,
      preparation: run.preparation,
      ...(run.direction ? { direction: run.direction } : {}),
      ...(verdict ? { verdict } : {}),
      ...intervals(computed?.answer ?? null),
    },
  };
}

/** Everything that verdicts and the observed onset of a study are worked out from. */
export async function buildEvidence(conn: Conn, of: Of): Promise<EvidencePlan | null> {
  const prediction = await latestPrediction(conn, of);
  if (!prediction) return null;
  const runs = (await runsWithReadings(conn, of)).filter((r) => COUNTED.has(r.state));
  const verdicts = await verdictsOfRuns(conn, { labId: of.labId, runIds: runs.map((r) => r.id) });
  const found: EvidenceRun[] = [];
  for (const r of runs) {
    const evidence = await evidenceRun(conn, of, r, prediction, verdicts);
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
