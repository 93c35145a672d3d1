import type { Metadata } from 'next';
import { PageBody, PageHead } from '@/components/frame';
import { predictionOutlines } from '@/db/queries/predictions';
import { studiesOfLab } from '@/db/queries/studies';
import { newestSystems } from '@/db/queries/systems';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { library } from '@/lib/sim/library';
import { LabSystems } from './_components/lab-systems';
import { ModelPlate } from './_components/model-plate';
import { predictedHere } from './_components/predicted-here';

export const metadata: Metadata = { title: 'Models' };

/** Published systems to start from, each with its source, and the lab's own. */
export default async function ModelsPage() {
  const member = await pageMember();
  const { labId } = member;
  const db = database();
  const studies = await studiesOfLab(db, { labId });
  const wanted = { labId, studyIds: studies.map((s) => s.id) };
  const [outlines, systems] = await Promise.all([
    predictionOutlines(db, wanted),
    newestSystems(db, wanted),
  ]);
  const writes = may(member, 'write system');
  return (
    <PageBody>
      <PageHead title="Models" subtitle="Published systems to start from, and the lab’s own" />
      <div className="mt-6 grid gap-6 desk:grid-cols-2">
        {library.map((model) => (
          <ModelPlate
            key={model.id}
            model={model}
            predicted={predictedHere(model, studies, outlines)}
            startable={writes}
          />
        ))}
      </div>
      <h2 className="mt-10 mb-3 text-section font-semibold">The lab’s own</h2>
      <LabSystems studies={studies} systems={systems} startable={writes} />
    </PageBody>
  );
}
