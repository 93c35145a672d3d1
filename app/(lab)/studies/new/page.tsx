import type { Metadata } from 'next';
import { PageBody, PageHead } from '@/components/frame';
import { Caution, ForbiddenState, KeyLink } from '@/components/ui';
import { studiesOfLab, usableRigs } from '@/db/queries/studies';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { citationOf } from '@/lib/server/systems/published-source';
import { library } from '@/lib/sim/library';
import { NewStudyForm } from './_components/new-study-form';

export const metadata: Metadata = { title: 'New study' };

/** A study starts from a published model or from the newest system of a study here. */
export default async function NewStudyPage({
  searchParams,
}: {
  searchParams: Promise<{ model?: string; study?: string }>;
}) {
  const member = await pageMember();
  if (!may(member, 'write system')) {
    return (
      <PageBody>
        <ForbiddenState
          title="You cannot start a study"
          who="The head or an investigator can."
          action={<KeyLink href="/studies">Back to the studies</KeyLink>}
        />
      </PageBody>
    );
  }
  const { labId } = member;
  const db = database();
  const [studies, rigs] = await Promise.all([
    studiesOfLab(db, { labId }),
    usableRigs(db, { labId }),
  ]);
  const wanted = await searchParams;
  return (
    <PageBody>
      <PageHead title="New study" />
      <NewStudyForm
        models={library.map((m) => ({
          id: m.id,
          title: m.title,
          summary: m.summary,
          source: citationOf(m.source),
          perturbs: m.perturbs,
          doseLabel: m.doseLabel,
          doseUnit: m.doseUnit,
        }))}
        studies={studies.map(({ id, title, perturbs, doseLabel, doseUnit }) => ({
          id,
          title,
          perturbs,
          doseLabel,
          doseUnit,
        }))}
        rigs={rigs}
        wanted={{
          model: library.find((m) => m.id === wanted.model)?.id ?? null,
          study: studies.find((s) => s.id === wanted.study)?.id ?? null,
        }}
      />
      <div className="mt-6">
        <Caution />
      </div>
    </PageBody>
  );
}
