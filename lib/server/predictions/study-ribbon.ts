import type { Conn } from '@/db/client';
import { latestPrediction } from '@/db/queries/predictions';
import { levelMarks, observedOnsets } from '@/db/queries/study-ribbons';
import { latestSystem } from '@/db/queries/systems';
import { answerRibbon } from './ribbon';

/** The study's newest prediction with its ribbon, or null before there is one. */
export async function studyRibbon(
  conn: Conn,
  of: { labId: string; studyId: string; ceilingDose: number | null },
) {
  const wanted = { labId: of.labId, studyIds: [of.studyId] };
  const [prediction, system, levels, observed] = await Promise.all([
    latestPrediction(conn, of),
    latestSystem(conn, of),
    levelMarks(conn, wanted),
    observedOnsets(conn, wanted),
  ]);
  if (!prediction || !system) return null;
  const { model, control } = prediction.request;
  const ribbon = answerRibbon(
    { answer: prediction.answer, model, control, systemNumber: prediction.systemNumber },
    { ceilingDose: of.ceilingDose, systemNumber: system.number },
    { levels, observed: observed.get(of.studyId) ?? [] },
  );
  return { prediction, ribbon, stale: prediction.systemNumber !== system.number };
}
