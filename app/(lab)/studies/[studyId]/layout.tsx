import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import type { ReactNode } from 'react';
import { cache } from 'react';
import { PageBody } from '@/components/frame';
import { studyById, studyProgress } from '@/db/queries/studies';
import { waitingAt } from '@/db/queries/study-stations';
import { database } from '@/lib/server/database';
import { pageMember } from '@/lib/server/member';
import { StudyFrame } from './_components/study-frame';

type Props = { params: Promise<{ studyId: string }> };

const studyHere = cache(async (studyId: string) => {
  const { labId } = await pageMember();
  return studyById(database(), { labId, studyId });
});

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  const study = await studyHere((await params).studyId);
  return { title: study?.title ?? 'Study' };
}

/** Head of every page of a study: its title and how far the work is. */
export default async function StudyLayout({ params, children }: Props & { children: ReactNode }) {
  const { studyId } = await params;
  const { labId } = await pageMember();
  const study = await studyHere(studyId);
  if (!study) notFound();
  const stations = (await studyProgress(database(), { labId, studyId })) ?? [];
  const remarks = [study.summary, study.simulated ? 'simulated readings' : ''].filter(Boolean);
  return (
    <PageBody>
      <StudyFrame
        studyId={studyId}
        title={study.title}
        subtitle={remarks.join('; ')}
        stations={stations.map(({ key, name, state, fact }) => ({ key, name, state, fact }))}
        waitingAt={waitingAt(stations)}
      />
      {children}
    </PageBody>
  );
}
