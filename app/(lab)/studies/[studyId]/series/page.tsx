import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { JoinedPlate } from '@/components/charts';
import { Caution, EmptyState, FindingAndTable, KeyLink } from '@/components/ui';
import { levelsOf, seriesVersions } from '@/db/queries/series';
import { studyById } from '@/db/queries/studies';
import { stampText } from '@/lib/format';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { studyRibbon } from '@/lib/server/predictions/study-ribbon';
import { DecisionForm } from './_components/decision-form';
import { DesignPanel } from './_components/design-panel';
import { LevelTable } from './_components/level-table';
import { SeriesFinding } from './_components/series-finding';
import { VersionList } from './_components/version-list';

export const metadata: Metadata = { title: 'Series' };

type Props = {
  params: Promise<{ studyId: string }>;
  searchParams: Promise<{ version?: string }>;
};

/** Which levels, how many, how long, how often, and what that buys. */
export default async function SeriesPage({ params, searchParams }: Props) {
  const member = await pageMember();
  const { labId } = member;
  const { studyId } = await params;
  const db = database();
  const study = await studyById(db, { labId, studyId });
  if (!study) notFound();
  const [shown, versions] = await Promise.all([
    studyRibbon(db, { labId, studyId, ceilingDose: study.ceilingDose }),
    seriesVersions(db, { labId, studyId }),
  ]);
  const asked = Number((await searchParams).version);
  const version = versions.find((v) => v.number === asked) ?? versions[0] ?? null;
  const levels = version ? await levelsOf(db, { labId, seriesVersionId: version.id }) : [];
  const writes = may(member, 'write series');
  const zone = member.lab.timeZone;
  if (!shown) {
    return (
      <EmptyState
        title="No prediction to plan from yet"
        action={<KeyLink href={`/studies/${studyId}/prediction`}>To the prediction</KeyLink>}
      >
        A series puts its levels where the predicted onset is least certain.
      </EmptyState>
    );
  }
  const { prediction, ribbon } = shown;
  const units = {
    dose: study.doseUnit,
    doseLabel: study.doseLabel,
    control: ribbon.unit,
    controlLabel: ribbon.label,
  };
  const design = writes ? (
    <DesignPanel
      studyId={studyId}
      predictionId={prediction.id}
      onsets={prediction.answer.onsets.map((o, i) => ({
        ordinal: i,
        value: o.value,
        low: o.spread?.low ?? null,
        high: o.spread?.high ?? null,
        reachable: o.dose !== null,
      }))}
      unit={ribbon.unit}
      first={versions.length === 0}
    />
  ) : null;
  return (
    <>
      <JoinedPlate
        {...ribbon}
        levels={levels.map((l) => ({ control: l.control, state: 'planned', id: l.id }))}
      />
      {version ? (
        <FindingAndTable
          finding={
            <SeriesFinding
              version={version}
              levels={levels}
              units={units}
              actions={
                <DecisionForm
                  studyId={studyId}
                  version={{
                    id: version.id,
                    number: version.number,
                    revision: version.revision,
                    state: version.state,
                    laidOut: version.laidOutAt !== null,
                  }}
                  writes={writes}
                  approves={may(member, 'approve series')}
                />
              }
              submitted={version.submittedAt ? stampText(version.submittedAt, zone) : null}
              decided={version.decidedAt ? stampText(version.decidedAt, zone) : null}
            />
          }
          table={<LevelTable levels={levels} units={units} />}
        />
      ) : (
        <div className="mt-6">
          <EmptyState title="No series yet">
            {writes
              ? 'Say below what to look for; the levels are placed where they tell most.'
              : 'An investigator or the head designs it.'}
          </EmptyState>
        </div>
      )}
      {design}
      <VersionList
        studyId={studyId}
        shown={version?.number ?? null}
        versions={versions.map((v) => ({
          number: v.number,
          state: v.state,
          author: v.author,
          made: stampText(v.createdAt, zone),
          reason: v.reason,
          decider: v.decider,
          decision: v.decision,
          inherited: v.inheritedFrom !== null,
        }))}
      />
      <div className="mt-6">
        <Caution />
      </div>
    </>
  );
}
