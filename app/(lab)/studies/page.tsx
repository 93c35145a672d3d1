import type { Metadata } from 'next';
import { PageBody, PageHead } from '@/components/frame';
import { EmptyState, KeyLink } from '@/components/ui';
import { predictionOutlines } from '@/db/queries/predictions';
import { progressOfStudies, studiesOfLab } from '@/db/queries/studies';
import { levelMarks, observedOnsets } from '@/db/queries/study-ribbons';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { rowOf } from './_components/row-of';
import { StudiesTable } from './_components/studies-table';

export const metadata: Metadata = { title: 'Studies' };

/** Which studies there are, how far each is, where its onset band lies, what has been observed. */
export default async function StudiesPage() {
  const member = await pageMember();
  const { labId } = member;
  const db = database();
  const studies = await studiesOfLab(db, { labId });
  const wanted = { labId, studyIds: studies.map((s) => s.id) };
  const [progress, outlines, marks, observed] = await Promise.all([
    progressOfStudies(db, wanted),
    predictionOutlines(db, wanted),
    levelMarks(db, wanted),
    observedOnsets(db, wanted),
  ]);
  const writes = may(member, 'write system');
  const newKey = (
    <KeyLink href="/studies/new" kind="filled">
      New study
    </KeyLink>
  );
  const rows = studies.map((study) =>
    rowOf(study, {
      stations: progress.get(study.id) ?? [],
      outline: outlines.get(study.id) ?? null,
      levels: marks.filter((m) => m.studyId === study.id),
      observed: observed.get(study.id) ?? [],
    }),
  );
  return (
    <PageBody>
      <div className="mb-6">
        <PageHead title="Studies" actions={writes && rows.length > 0 ? newKey : undefined} />
      </div>
      {rows.length > 0 ? (
        <StudiesTable rows={rows} />
      ) : (
        <EmptyState title="No study yet" action={writes ? newKey : undefined}>
          A study is one system, one control parameter, and one question: where does it begin to
          oscillate?
          {writes ? null : ' The head or an investigator can start one.'}
        </EmptyState>
      )}
    </PageBody>
  );
}
