import type { Metadata } from 'next';
import Link from 'next/link';
import { notFound } from 'next/navigation';
import { Plate } from '@/components/ui';
import { studyById } from '@/db/queries/studies';
import { latestSystem, systemByNumber, systemVersions } from '@/db/queries/systems';
import { stampText } from '@/lib/format';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { publishedSource } from '@/lib/server/systems/published-source';
import { SystemForm } from './_components/system-form';
import { SystemView } from './_components/system-view';
import { VersionList } from './_components/version-list';

export const metadata: Metadata = { title: 'System' };

type Props = {
  params: Promise<{ studyId: string }>;
  searchParams: Promise<{ version?: string }>;
};

/** Which equations, and how sure: the newest version as a form, older ones to look at. */
export default async function SystemPage({ params, searchParams }: Props) {
  const member = await pageMember();
  const { labId } = member;
  const { studyId } = await params;
  const { version } = await searchParams;
  const db = database();
  const study = await studyById(db, { labId, studyId });
  if (!study) notFound();
  const of = { labId, studyId };
  const [newest, versions] = await Promise.all([latestSystem(db, of), systemVersions(db, of)]);
  const wanted = version === undefined ? newest : await byNumber(of, version);
  if (!newest || !wanted) notFound();
  const old = wanted.number !== newest.number;
  const writes = may(member, 'write system') && !old;
  const source = study.libraryId ? publishedSource(study.libraryId) : null;
  const { model, control } = wanted;
  return (
    <div className="flex flex-col gap-6 desk:flex-row desk:items-start">
      <div className="min-w-0 flex-1">
        {old ? (
          <p className="mb-4 border-l-[3px] border-ink bg-plate px-4 py-2">
            System v{wanted.number}, to look at. The newest is{' '}
            <Link href={`/studies/${studyId}/system`} className="underline">
              v{newest.number}
            </Link>
            .
          </p>
        ) : null}
        {writes ? (
          <SystemForm
            studyId={studyId}
            number={wanted.number}
            model={model}
            control={control}
            doseLabel={study.doseLabel}
            doseUnit={study.doseUnit}
          />
        ) : (
          <SystemView model={model} control={control} />
        )}
      </div>
      <aside className="flex flex-col gap-6 desk:w-80 desk:shrink-0">
        {source ? (
          <Plate title="Source">
            <p>{source.title}</p>
            <p className="mt-2 text-caption text-ink2">{source.citation}</p>
            <p className="mt-2 text-caption text-ink2">
              Version 1: {source.provenance} Later versions are the lab’s own.
            </p>
          </Plate>
        ) : null}
        <Plate title="Versions">
          <VersionList
            studyId={studyId}
            shown={wanted.number}
            versions={versions.map((v) => ({
              number: v.number,
              reason: v.reason,
              by: v.createdByName,
              at: stampText(v.createdAt, member.lab.timeZone),
            }))}
          />
        </Plate>
      </aside>
    </div>
  );
}

async function byNumber(of: { labId: string; studyId: string }, version: string) {
  const number = Number(version);
  if (!Number.isSafeInteger(number) || number < 1) return null;
  return systemByNumber(database(), { ...of, number });
}
