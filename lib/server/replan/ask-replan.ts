import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { Conn } from '@/db/client';
import { latestEstimate } from '@/db/queries/estimates';
import { latestPrediction } from '@/db/queries/predictions';
import { runsWithReadings, standingVerdict, verdictsOfRuns } from '@/db/queries/readings';
import { approvedVersion, levelsOf } from '@/db/queries/series';
import { studyById } from '@/db/queries/studies';
import { job } from '@/db/schema';
import type { DesignRequest, PredictedOnset, Verdict } from '@/lib/contracts';
import type { replanForm } from '@/lib/contracts/forms/readings';
import { controlToDose } from '@/lib/sim/dose-map';
import type { ActionContext } from '../action';
import { AppError, notFound } from '../errors';
import { enqueue } from '../jobs/queue';
import { fallingMap } from '../predictions/ribbon';
import { doseRange } from '../series/ask-design';
import type { DesignPlan } from '../series/design-plan';
import type { Envelope, SeriesVersion, Study } from '../series/types';
import { beliefOf } from './beliefs';
import { doseInForce } from './dose-in-force';

type Of = { labId: string; studyId: string };
type Prediction = NonNullable<Awaited<ReturnType<typeof latestPrediction>>>;
type Done = { dose: number; control: number; verdict: Verdict | null };
type Ground = Awaited<ReturnType<typeof groundOf>>;

/** What a proposal stands on; each thing that is missing is said with where to get it. */
async function groundOf(conn: Conn, of: Of) {
  const study = await studyById(conn, of);
  if (!study) throw notFound('study');
  const [approved, prediction, estimate] = await Promise.all([
    approvedVersion(conn, of),
    latestPrediction(conn, of),
    latestEstimate(conn, of),
  ]);
  if (!prediction || prediction.answer.onsets.length === 0) {
    throw new AppError('not-possible', 'No onset is predicted for this study.', {
      mend: 'Predict it first; the next levels start from there.',
    });
  }
  if (!approved?.envelope) {
    throw new AppError('not-possible', 'No version of the series is approved.', {
      mend: 'Design one on the Series page and have it approved; later levels stay within it.',
    });
  }
  if (!estimate) {
    throw new AppError('not-possible', 'No run has a verdict yet, so nothing is new.', {
      mend: 'Upload the readings of a run first.',
    });
  }
  const caps = await capsOf(conn, { labId: of.labId, seriesVersionId: approved.id });
  return { study, approved, envelope: approved.envelope, prediction, estimate, caps };
}

/** The longest settling and recording that the approved version was designed with. */
async function capsOf(conn: Conn, of: { labId: string; seriesVersionId: string }) {
  const [made] = await conn
    .select({ input: job.input })
    .from(job)
    .where(
      and(eq(job.labId, of.labId), eq(job.kind, 'design'), eq(job.resultId, of.seriesVersionId)),
    );
  const plan = made?.input as DesignPlan | undefined;
  return {
    settleCapMinutes: plan?.settleCapMinutes ?? null,
    recordCapMinutes: plan?.recordCapMinutes ?? null,
  };
}

async function doneLevels(conn: Conn, of: Of): Promise<Done[]> {
  const runs = (await runsWithReadings(conn, of)).filter((r) => r.setAt !== null);
  const verdicts = await verdictsOfRuns(conn, { labId: of.labId, runIds: runs.map((r) => r.id) });
  return runs.map((r) => ({
    dose: r.deliveredDose ?? r.dose,
    control: r.control,
    verdict: standingVerdict(verdicts.filter((v) => v.runId === r.id)).verdict,
  }));
}

/** A limit that the study has now and one that was approved: the smaller holds. */
const least = (...limits: (number | null)[]) => {
  const known = limits.filter((x): x is number => x !== null);
  return known.length > 0 ? Math.min(...known) : undefined;
};

function limitsOf(study: Study, approved: SeriesVersion, envelope: Envelope, start: number) {
  const ceiling = least(study.ceilingDose, envelope.ceilingDose);
  const step = least(study.largestStep, envelope.largestStep);
  const stepped = step !== undefined && approved.order !== 'randomised';
  return {
    start,
    ...(ceiling === undefined ? {} : { ceiling }),
    ...(stepped ? { largestStep: step } : {}),
  };
}

/** One predicted onset with what it is sought by; null where no dose reaches it. */
function edgeOf(
  ground: Ground,
  done: Done[],
  onset: { predicted: PredictedOnset; ordinal: number },
  asked: { levels: number; start: number },
) {
  const { approved, prediction, estimate, study, envelope } = ground;
  const { control } = prediction.request;
  const { predicted, ordinal } = onset;
  const same = estimate.predictionId === prediction.id;
  const belief = beliefOf(same ? estimate.answers[ordinal] : undefined, predicted, done);
  const middle = 'interval' in belief ? [belief.interval.value] : belief.values;
  const doses = middle
    .map((c) => controlToDose(control.doseMap, c))
    .filter((d): d is number => d !== null);
  if (doses.length === 0) return null;
  const flip = { above: 'below', below: 'above' } as const;
  const request: DesignRequest = {
    onset: { values: doses },
    oscillates: fallingMap(control) ? flip[predicted.oscillates] : predicted.oscillates,
    range: doseRange(control),
    order: approved.order,
    levels: asked.levels,
    replicates: approved.replicates,
    blur: 0,
    doubt: 0,
    limits: limitsOf(study, approved, envelope, asked.start),
    seed: 1,
  };
  const mean = doses.reduce((sum, d) => sum + d, 0) / doses.length;
  return { belief, request, mean };
}

function planOf(ground: Ground, done: Done[], asked: { levels: number; start: number }) {
  const { approved, prediction, estimate, study, envelope } = ground;
  const { answer, request } = prediction;
  const edges = answer.onsets
    .map((predicted, ordinal) => edgeOf(ground, done, { predicted, ordinal }, asked))
    .filter((e) => e !== null)
    .sort((a, b) => (approved.order === 'descending' ? b.mean - a.mean : a.mean - b.mean));
  if (edges.length === 0) {
    throw new AppError('not-possible', 'No dose reaches any onset as it is estimated now.', {
      mend: 'Widen the dose map on the System page.',
    });
  }
  const noisy = request.model.readouts?.find((r) => (r.noiseSd ?? 0) > 0);
  const runs = `${estimate.runsJudged} ${estimate.runsJudged === 1 ? 'run' : 'runs'}`;
  const plan: DesignPlan = {
    studyId: study.id,
    predictionId: prediction.id,
    scheme: approved.scheme,
    reason: `replanned after ${runs}`,
    requests: edges.map((e) => e.request),
    control: request.control,
    timeUnit: request.model.timeUnit,
    outlook: outlookOf(prediction),
    noise: noisy?.noiseSd ? { readout: noisy.symbol, sd: noisy.noiseSd } : null,
    ...ground.caps,
    replanned: true,
    replan: {
      beliefs: edges.map((e) => e.belief),
      envelope: {
        doseLow: envelope.doseLow,
        doseHigh: envelope.doseHigh,
        ceiling: envelope.ceilingDose,
        largestStep: envelope.largestStep,
      },
      done: done.map(({ dose, verdict }) => ({ dose, verdict })),
    },
  };
  return plan;
}

const outlookOf = ({ answer }: Prediction): DesignPlan['outlook'] => ({
  branch: { ...answer.branch, steadyState: {} },
  cycles: answer.cycles,
  onsets: answer.onsets.map((o) => ({ ...o, spread: null })),
});

/**
 * Asks for the next levels after the evidence so far, in the scheme, order and number of preparations
 * that are approved. They become a draft; nothing is approved or placed by it.
 */
export async function askReplan(
  { db, member }: ActionContext,
  input: z.output<typeof replanForm>,
): Promise<{ jobId: string }> {
  const of = { labId: member.labId, studyId: input.studyId };
  const ground = await groundOf(db, of);
  const { approved } = ground;
  const done = await doneLevels(db, of);
  const rows = await levelsOf(db, { labId: of.labId, seriesVersionId: approved.id });
  const start = await doseInForce(db, {
    ...of,
    scheme: approved.scheme,
    replicates: approved.replicates,
    firstDose: rows[0]?.dose ?? ground.envelope.doseLow,
  });
  const { jobId } = await enqueue(db, {
    ...of,
    askedBy: member.userId,
    kind: 'design',
    input: planOf(ground, done, { levels: input.levels, start }),
  });
  return { jobId };
}
