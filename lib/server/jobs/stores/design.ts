import { and, eq, max } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { level, seriesVersion, study } from '@/db/schema';
import { audit } from '../../audit';
import { limitBreaches } from '../../series/breaches';
import type { DesignPlan } from '../../series/design-plan';
import { JobRefused, type Store } from '../kind';
import type { DesignResult } from '../works/design';

/** Makes a draft version of what was designed; the study's limits are asked again first. */
export const storeDesign: Store = async (tx, job, raw, now) => {
  const plan = job.input as DesignPlan;
  const result = raw as DesignResult;
  const [about] = await tx
    .select()
    .from(study)
    .where(and(eq(study.id, plan.studyId), eq(study.labId, job.labId)))
    .for('update');
  if (!about) throw new JobRefused('The study is gone.');
  const order = plan.requests[0]?.order ?? 'ascending';
  const breaches = limitBreaches(about, { order, scheme: plan.scheme }, result.levels);
  if (breaches.length > 0) throw new JobRefused(breaches.join(' '));
  const [row] = await tx
    .select({ most: max(seriesVersion.number) })
    .from(seriesVersion)
    .where(eq(seriesVersion.studyId, about.id));
  const number = (row?.most ?? 0) + 1;
  const seriesVersionId = uuid();
  await tx.insert(seriesVersion).values({
    id: seriesVersionId,
    labId: job.labId,
    studyId: about.id,
    number,
    predictionId: plan.predictionId,
    scheme: plan.scheme,
    order,
    replicates: plan.requests[0]?.replicates ?? 1,
    designs: result.designs,
    notes: result.notes,
    reason: plan.reason,
    createdBy: job.askedBy,
    createdAt: now,
  });
  await tx
    .insert(level)
    .values(result.levels.map((l) => ({ id: uuid(), labId: job.labId, seriesVersionId, ...l })));
  await audit(tx, {
    labId: job.labId,
    actorId: job.askedBy,
    event: 'series.created',
    studyId: about.id,
    subjectId: seriesVersionId,
    data: { number, levels: result.levels.length, replanned: plan.replanned },
  });
  return seriesVersionId;
};
