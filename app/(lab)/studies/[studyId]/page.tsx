import { notFound } from 'next/navigation';
import type { ReactNode } from 'react';
import { JoinedPlate } from '@/components/charts';
import { Caution, Finding, FindingAndTable, KeyLink, Plate } from '@/components/ui';
import { type StudyRow, studyById, studyProgress, usableRigs } from '@/db/queries/studies';
import { type Station, waitingAt } from '@/db/queries/study-stations';
import { dateText, figure, stampText, unitText, withUnit, zoned } from '@/lib/format';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { studyRibbon } from '@/lib/server/predictions/study-ribbon';
import { ChangeStudy } from './_components/change-study';

/** What the study is, its limits, and what comes next. */
export default async function StudyPage({ params }: { params: Promise<{ studyId: string }> }) {
  const member = await pageMember();
  const { labId } = member;
  const { studyId } = await params;
  const db = database();
  const study = await studyById(db, { labId, studyId });
  if (!study) notFound();
  const [progress, shown] = await Promise.all([
    studyProgress(db, { labId, studyId }),
    studyRibbon(db, { labId, studyId, ceilingDose: study.ceilingDose }),
  ]);
  const stations = progress ?? [];
  const writes = may(member, 'write system');
  const facts = factsOf(study, member.lab.timeZone);
  const rigs = writes ? await usableRigs(db, { labId }) : [];
  return (
    <>
      {shown ? <JoinedPlate {...shown.ribbon} /> : null}
      <FindingAndTable
        finding={<Next studyId={studyId} stations={stations} />}
        table={
          <Plate title="The study and its limits">
            <dl className="grid gap-x-6 gap-y-2 tablet:grid-cols-[12rem_minmax(0,1fr)]">
              {facts.map(({ name, value }) => (
                <div key={name} className="contents">
                  <dt className="text-caption text-ink2 tablet:pt-[3px]">{name}</dt>
                  <dd className="whitespace-pre-line">{value}</dd>
                </div>
              ))}
            </dl>
            {writes ? (
              <ChangeStudy
                studyId={studyId}
                rigs={rigs}
                start={draftOf(study, member.lab.timeZone)}
              />
            ) : null}
          </Plate>
        }
      />
      <div className="mt-6">
        <Caution />
      </div>
    </>
  );
}

const number = (value: number | null) => (value === null ? '' : String(value));

const draftOf = (study: StudyRow, zone: string) => ({
  title: study.title,
  summary: study.summary,
  perturbs: study.perturbs,
  rigId: study.rigId ?? '',
  doseLabel: study.doseLabel,
  doseUnit: study.doseUnit,
  ceilingDose: number(study.ceilingDose),
  largestStep: number(study.largestStep),
  stopRules: study.stopRules,
  approvalReference: study.approvalReference ?? '',
  approvalExpires: study.approvalExpires
    ? (zoned(study.approvalExpires, zone).toISODate() ?? '')
    : '',
});

function factsOf(study: StudyRow, zone: string): { name: string; value: ReactNode }[] {
  const dose = (value: number | null) =>
    value === null ? 'not set' : withUnit(figure(value, 6), study.doseUnit);
  const approval = study.approvalReference
    ? `${study.approvalReference}${
        study.approvalExpires ? `, to the end of ${dateText(study.approvalExpires, zone)}` : ''
      }`
    : 'none stated';
  return [
    { name: 'Perturbs', value: study.perturbs },
    { name: 'Rig', value: study.rigName ?? 'none yet' },
    { name: 'Dose', value: `${study.doseLabel}, in ${unitText(study.doseUnit)}` },
    { name: 'Ceiling dose', value: dose(study.ceilingDose) },
    { name: 'Largest step', value: dose(study.largestStep) },
    { name: 'Stop rules', value: study.stopRules },
    { name: 'Approval', value: approval },
    {
      name: 'Begun',
      value: `${stampText(study.createdAt, zone)}, by ${study.createdByName}`,
    },
    ...(study.simulated
      ? [{ name: 'Readings', value: 'simulated by this program, with noise; not measured' }]
      : []),
  ];
}

const NEXT: Record<Station['key'], { title: string; key: string }> = {
  system: { title: 'This study waits for its system.', key: 'Write the system' },
  prediction: { title: 'Next: predict where it begins to oscillate.', key: 'Go to the prediction' },
  series: { title: 'Next: choose the levels of the series.', key: 'Go to the series' },
  sessions: { title: 'Next: lay the series out as sessions.', key: 'Go to the sessions' },
  readings: { title: 'Next: bring in the readings.', key: 'Go to the readings' },
  onset: {
    title: 'Next: compare the observed onset with the predicted one.',
    key: 'Go to the onset',
  },
};

const ALL_DONE = 'Every step of this study is done.';

/** A step that is under way: "Sessions: 22 of 24 done." */
const begunTitle = ({ name, fact }: Station) => `${name}: ${fact}.`;

/** The first step that is not finished, with the way to it. */
function Next({ studyId, stations }: { studyId: string; stations: Station[] }) {
  const waiting = stations[waitingAt(stations)];
  const open = waiting ?? stations.find((s) => s.state !== 'done');
  const station = open ?? stations.at(-1);
  if (!station) return null;
  const { title, key } = NEXT[station.key];
  return (
    <Finding
      title={open ? (station.state === 'part' ? begunTitle(station) : title) : ALL_DONE}
      actions={
        <KeyLink href={`/studies/${studyId}/${station.key}`} kind="filled">
          {key}
        </KeyLink>
      }
    >
      {station.state === 'part' && station.missing ? (
        <p>The next step waits for {station.missing}.</p>
      ) : null}
    </Finding>
  );
}
