import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { Conn } from '@/db/client';
import { prediction, study, systemVersion } from '@/db/schema';
import type { Control, DesignRequest, PredictedOnset } from '@/lib/contracts';
import type { DesignForm, designForm } from '@/lib/contracts/forms/series';
import { controlToDose } from '@/lib/sim/dose-map';
import type { ActionContext } from '../action';
import { AppError, notFound } from '../errors';
import { enqueue } from '../jobs/queue';
import type { DesignPlan } from './design-plan';
import type { Study } from './types';

/** The prediction that a design starts from, of this lab and study. */
export async function predictionFor(
  conn: Conn,
  of: { labId: string; studyId: string; predictionId: string },
) {
  const [row] = await conn
    .select({ prediction, study, system: systemVersion })
    .from(prediction)
    .innerJoin(study, eq(study.id, prediction.studyId))
    .innerJoin(systemVersion, eq(systemVersion.id, prediction.systemVersionId))
    .where(
      and(
        eq(prediction.id, of.predictionId),
        eq(prediction.studyId, of.studyId),
        eq(prediction.labId, of.labId),
      ),
    );
  if (!row) throw notFound('prediction');
  return row;
}

/** The ends of the control range as doses, lower dose first; an unreachable end is left out of reach. */
export function doseRange(control: Control): [number, number] {
  const ends = [control.from, control.to].map((value) => controlToDose(control.doseMap, value));
  const known = ends.filter((d): d is number => d !== null);
  if (control.doseMap?.kind.startsWith('hill') && known.length < 2) {
    // A Hill map never quite reaches its plateau: dose nought stands for the near end.
    known.push(0);
  }
  const low = Math.min(...known);
  const high = Math.max(...known);
  if (!(low < high)) {
    throw new AppError(
      'not-possible',
      'The dose map does not reach both ends of the control range.',
      {
        mend: 'Narrow the range of the control parameter on the System page.',
      },
    );
  }
  return [low, high];
}

/** With an inhibiting map more dose is less control: the oscillating side turns over. */
function sideOnDoses(control: Control, onset: PredictedOnset): 'above' | 'below' {
  const a = controlToDose(control.doseMap, onset.value);
  const nudged = controlToDose(control.doseMap, onset.value + 1e-4 * (control.to - control.from));
  const rising = a === null || nudged === null || nudged >= a;
  const flip = { above: 'below', below: 'above' } as const;
  return rising ? onset.oscillates : flip[onset.oscillates];
}

/** What the engine is asked for one onset. */
export function designRequestFor(
  about: Pick<Study, 'ceilingDose' | 'largestStep' | 'doseUnit'>,
  control: Control,
  onset: PredictedOnset,
  form: Pick<DesignForm, 'levels' | 'replicates' | 'order' | 'doubtFactor'>,
): DesignRequest {
  const doses = (onset.spread?.doses ?? [onset.dose]).filter((d): d is number => d !== null);
  if (doses.length === 0) {
    throw new AppError(
      'not-possible',
      `The onset at ${onset.value.toPrecision(3)} cannot be reached by any dose.`,
      {
        at: 'onsets',
      },
    );
  }
  const range = doseRange(control);
  const limits = {
    ...(about.ceilingDose !== null ? { ceiling: about.ceilingDose } : {}),
    ...(about.largestStep !== null && form.order !== 'randomised'
      ? { largestStep: about.largestStep }
      : {}),
  };
  return {
    onset: { values: doses },
    oscillates: sideOnDoses(control, onset),
    range,
    order: form.order,
    levels: form.levels,
    replicates: form.replicates,
    blur: 0,
    doubt: Math.log(form.doubtFactor),
    limits,
    seed: 1,
  };
}

/** Asks for a new version of the series; nothing is approved or placed by it. */
export async function askDesign(
  { db, member }: ActionContext,
  input: z.output<typeof designForm>,
): Promise<{ jobId: string }> {
  const {
    prediction: p,
    study: about,
    system,
  } = await predictionFor(db, {
    labId: member.labId,
    ...input,
  });
  const onsets = input.onsets.map((i) => p.answer.onsets[i]).filter((o) => o !== undefined);
  if (onsets.length === 0) {
    throw new AppError('not-possible', 'The prediction has no such onset.', {
      at: 'onsets',
      mend: 'Choose an onset that the prediction shows.',
    });
  }
  const noisy = system.model.readouts?.find((r) => (r.noiseSd ?? 0) > 0);
  const plan: DesignPlan = {
    studyId: about.id,
    predictionId: p.id,
    scheme: input.scheme,
    reason: input.reason,
    requests: onsets.map((o) => designRequestFor(about, system.control, o, input)),
    control: system.control,
    timeUnit: system.model.timeUnit,
    outlook: {
      branch: { ...p.answer.branch, steadyState: {} },
      cycles: p.answer.cycles,
      onsets: p.answer.onsets.map((o) => ({ ...o, spread: null })),
    },
    noise: noisy?.noiseSd ? { readout: noisy.symbol, sd: noisy.noiseSd } : null,
    settleCapMinutes: input.settleCapMinutes ?? null,
    recordCapMinutes: input.recordCapMinutes ?? null,
    replanned: false,
  };
  return enqueue(db, {
    labId: member.labId,
    studyId: about.id,
    askedBy: member.userId,
    kind: 'design',
    input: plan,
  });
}
