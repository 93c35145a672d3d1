import { and, eq, inArray, max, ne } from 'drizzle-orm';
import type { EstimateAnswer } from '@/lib/contracts';
import type { Conn } from '../client';
import { level, onsetEstimate, run, seriesVersion } from '../schema';
import { newestVerdicts } from './studies';

type Wanted = { labId: string; studyIds: string[] };

/** One level as a ribbon marks it: planned, or what its run shows. */
export type LevelMark = {
  studyId: string;
  control: number;
  dose: number;
  state: 'planned' | 'steady' | 'damped' | 'sustained' | 'undecided' | 'stopped' | 'lost';
  direction: 'up' | 'down' | null;
  runId: string | null;
};

/** Levels of each study's newest series, each run as a mark of its own. */
export async function levelMarks(conn: Conn, { labId, studyIds }: Wanted): Promise<LevelMark[]> {
  if (studyIds.length === 0) return [];
  const runs = await conn
    .select({
      studyId: run.studyId,
      runId: run.id,
      levelId: run.levelId,
      control: run.control,
      dose: run.dose,
      state: run.state,
      direction: run.direction,
    })
    .from(run)
    .where(and(eq(run.labId, labId), inArray(run.studyId, studyIds), ne(run.state, 'cancelled')));
  const verdicts = new Map(
    (await newestVerdicts(conn, { labId, studyIds })).map((v) => [v.runId, v.verdict]),
  );
  const marks: LevelMark[] = runs.map(({ levelId: _, state, ...r }) => {
    const lost = state === 'lost' ? 'lost' : null;
    const held = state === 'suspended' ? 'stopped' : null;
    return { ...r, state: verdicts.get(r.runId) ?? lost ?? held ?? 'planned' };
  });
  const withRun = new Set(runs.map((r) => r.levelId));
  for (const l of await newestLevels(conn, { labId, studyIds })) {
    if (withRun.has(l.levelId)) continue;
    const { levelId: _, ...place } = l;
    marks.push({ ...place, state: 'planned', direction: null, runId: null });
  }
  return marks;
}

async function newestLevels(conn: Conn, { labId, studyIds }: Wanted) {
  const newest = conn
    .select({ studyId: seriesVersion.studyId, number: max(seriesVersion.number).as('newest') })
    .from(seriesVersion)
    .where(and(eq(seriesVersion.labId, labId), inArray(seriesVersion.studyId, studyIds)))
    .groupBy(seriesVersion.studyId)
    .as('newest_series');
  return conn
    .select({
      studyId: seriesVersion.studyId,
      levelId: level.id,
      control: level.control,
      dose: level.dose,
    })
    .from(level)
    .innerJoin(seriesVersion, eq(seriesVersion.id, level.seriesVersionId))
    .innerJoin(
      newest,
      and(eq(newest.studyId, seriesVersion.studyId), eq(newest.number, seriesVersion.number)),
    )
    .where(eq(level.labId, labId));
}

/** The onsets of each study's newest estimate, by study id. */
export async function observedOnsets(
  conn: Conn,
  { labId, studyIds }: Wanted,
): Promise<Map<string, EstimateAnswer['onsets']>> {
  const found = new Map<string, EstimateAnswer['onsets']>();
  if (studyIds.length === 0) return found;
  const rows = await conn
    .select({ studyId: onsetEstimate.studyId, answers: onsetEstimate.answers })
    .from(onsetEstimate)
    .where(and(eq(onsetEstimate.labId, labId), inArray(onsetEstimate.studyId, studyIds)))
    .orderBy(onsetEstimate.createdAt, onsetEstimate.id);
  for (const row of rows)
    found.set(
      row.studyId,
      row.answers.flatMap((a) => a.onsets),
    );
  return found;
}
