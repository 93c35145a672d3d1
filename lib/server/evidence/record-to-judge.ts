import type { Conn } from '@/db/client';
import { readoutsOfRun, recordOfRun } from '@/db/queries/records';
import type { JudgeRequest, PredictAnswer, SystemModel } from '@/lib/contracts';
import { durationText } from '@/lib/format';
import { minutesPerUnit } from '@/lib/planner/cadence/time-unit';
import { readoutsOf } from './readouts';

/** Points a run may bring to be judged; above it, readings in succession are averaged. */
export const MOST_POINTS = 20_000;
/** Points of all runs of a study together: the job's input stays below what one packet holds. */
const ALL_POINTS = 150_000;
const FEWEST_POINTS = 1_000;

/** How many points each of `runs` runs may bring. */
export const pointsEach = (runs: number): number =>
  Math.min(MOST_POINTS, Math.max(FEWEST_POINTS, Math.floor(ALL_POINTS / Math.max(1, runs))));

/** Ten digits: far below any reading's error, and half the length in the job's input. */
const short = (x: number) => Number(x.toPrecision(10));

export type RunToJudge = { id: string; settleMinutes: number };
export type JudgeSetting = { model: SystemModel; answer: PredictAnswer };

/** The readout that a run is judged by: the first one declared that it has readings of. */
export async function readoutOf(
  conn: Conn,
  of: { labId: string; runId: string },
  model: SystemModel,
) {
  const present = await readoutsOfRun(conn, of);
  const declared = readoutsOf(model).map((r) => r.symbol);
  const first = declared.flatMap((symbol) => present.filter((p) => p.readout === symbol))[0];
  return first ?? present[0] ?? null;
}

/** The predicted periods, as a guide for verdicts. */
export function expectedPeriod(answer: PredictAnswer): JudgeRequest['expectedPeriod'] {
  const periods = [
    ...answer.onsets.map((o) => o.period),
    ...answer.cycles.filter((c) => c.stable).map((c) => c.period),
  ];
  if (periods.length === 0) return undefined;
  return { low: Math.min(...periods) * 0.5, high: Math.max(...periods) * 2 };
}

/**
 * A run's record in model time, from the end of its planned settling, with what was done to it in
 * words; null while it has no readings.
 */
export async function recordToJudge(
  conn: Conn,
  of: { labId: string; run: RunToJudge; most: number },
  setting: JudgeSetting,
): Promise<{ readout: string; judge: JudgeRequest; said: string[] } | null> {
  const { labId, run } = of;
  const { model } = setting;
  const chosen = await readoutOf(conn, { labId, runId: run.id }, model);
  if (!chosen) return null;
  const { readout, count } = chosen;
  const points = await recordOfRun(conn, { labId, runId: run.id, readout, count, most: of.most });
  const perUnit = minutesPerUnit(model.timeUnit);
  const noiseSd = model.readouts?.find((r) => r.symbol === readout)?.noiseSd;
  const period = expectedPeriod(setting.answer);
  const early = points.minutes.filter((m) => m < run.settleMinutes).length;
  const said: string[] = [];
  if (points.each > 1)
    said.push(`Each point is the mean of ${points.each} readings in succession.`);
  if (early > 0) {
    const settled = durationText(run.settleMinutes);
    said.push(
      `${early} ${early === 1 ? 'point' : 'points'} of the settling, before ${settled}, ${early === 1 ? 'does' : 'do'} not count.`,
    );
  }
  return {
    readout,
    said,
    judge: {
      times: points.minutes.map((m) => short(m / perUnit)),
      values: points.values.map((v) => (v === null ? null : short(v))),
      ...(noiseSd ? { noiseSd: noiseSd / Math.sqrt(points.each) } : {}),
      ...(period ? { expectedPeriod: period } : {}),
      ...(run.settleMinutes > 0 ? { from: run.settleMinutes / perUnit } : {}),
    },
  };
}
