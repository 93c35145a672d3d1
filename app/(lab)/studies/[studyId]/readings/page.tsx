import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { Judging } from '@/components/evidence/judging';
import { EmptyState, KeyLink } from '@/components/ui';
import { newestJob } from '@/db/queries/active-job';
import { studyById } from '@/db/queries/studies';
import { latestSystem } from '@/db/queries/systems';
import { lastMapping, uploadList } from '@/db/queries/uploads';
import type { SystemModel } from '@/lib/contracts';
import { uploadMapping } from '@/lib/contracts/forms/readings';
import { figure, withUnit } from '@/lib/format';
import { database } from '@/lib/server/database';
import { followedJob } from '@/lib/server/evidence/followed-job';
import { undecidedWords } from '@/lib/server/evidence/onset-view';
import { readoutsOf } from '@/lib/server/evidence/readouts';
import { runRecord } from '@/lib/server/evidence/run-record';
import { type RunRow, runRows } from '@/lib/server/evidence/run-rows';
import { may, pageMember } from '@/lib/server/member';
import { ChosenRun } from './_components/chosen-run';
import { FileTable } from './_components/file-table';
import { RunTable } from './_components/run-table';
import { UploadPanel } from './_components/upload-panel';
import { judgeAgainAction } from './actions';

export const metadata: Metadata = { title: 'Readings' };

type Props = {
  params: Promise<{ studyId: string }>;
  searchParams: Promise<{ run?: string }>;
};

const plural = (n: number, word: string) => `${n} ${word}${n === 1 ? '' : 's'}`;

function unitsOf(
  study: { doseUnit: string; doseLabel: string },
  system: { model: SystemModel; control: { symbol: string } },
) {
  const { model, control } = system;
  const parameter = model.parameters.find((p) => p.symbol === control.symbol);
  return {
    dose: study.doseUnit,
    doseLabel: study.doseLabel,
    control: parameter?.unit ?? '',
    controlLabel: parameter?.label || control.symbol,
    time: model.timeUnit,
    amplitude: readoutsOf(model)[0]?.unit ?? '',
  };
}

/** What came in, and what does each run show? */
export default async function ReadingsPage({ params, searchParams }: Props) {
  const member = await pageMember();
  const { labId } = member;
  const zone = member.lab.timeZone;
  const { studyId } = await params;
  const db = database();
  const of = { labId, studyId };
  const study = await studyById(db, of);
  if (!study) notFound();
  const [system, rows, files, job, mapping] = await Promise.all([
    latestSystem(db, of),
    runRows(db, of),
    uploadList(db, of),
    newestJob(db, { ...of, kind: 'evidence' }),
    lastMapping(db, { ...of, rigId: study.rigId }),
  ]);
  if (!system) notFound();
  if (rows.length === 0) return <NoRuns studyId={studyId} />;
  const uploads = may(member, 'upload readings');
  const asked = (await searchParams).run;
  const chosen = rows.find((r) => r.id === asked) ?? firstToSee(rows);
  const units = unitsOf(study, system);
  const record = chosen
    ? await runRecord(db, { labId, runId: chosen.id, levelId: chosen.levelId }, system.model)
    : null;
  const settable = rows.filter((r) => r.setAt !== null);
  return (
    <>
      <Judging studyId={studyId} job={followedJob(job)} again={uploads ? judgeAgainAction : null} />
      <Found rows={rows} simulated={study.simulated} />
      <RunTable studyId={studyId} rows={rows} units={units} chosen={chosen?.id ?? null} />
      {chosen ? (
        <ChosenRun
          studyId={studyId}
          row={chosen}
          record={record}
          units={units}
          zone={zone}
          simulated={study.simulated}
          overrules={may(member, 'overrule verdict')}
        />
      ) : null}
      {uploads && settable.length > 0 ? (
        <UploadPanel
          studyId={studyId}
          runs={settable.map((r) => ({
            id: r.id,
            label: `Run ${r.number}: ${withUnit(figure(r.dose, 4), study.doseUnit)}, preparation ${r.preparation}`,
          }))}
          chosen={chosen?.setAt ? chosen.id : null}
          readouts={readoutsOf(system.model)}
          zone={zone}
          mapping={uploadMapping.safeParse(mapping).data ?? null}
          filled={rows.every((r) => r.readings === 0)}
        />
      ) : null}
      {uploads && settable.length === 0 ? (
        <p className="mt-6 text-ink2">
          Readings can be uploaded once the dose of a run is set: their times count from there.
        </p>
      ) : null}
      <FileTable studyId={studyId} files={files} zone={zone} />
    </>
  );
}

/** The run to open the page on: an undecided one, else the first with readings, else any set one. */
function firstToSee(rows: RunRow[]): RunRow | null {
  return (
    rows.find((r) => r.verdict === 'undecided') ??
    rows.find((r) => r.readings > 0) ??
    rows.find((r) => r.verdict !== null) ??
    rows.find((r) => r.setAt !== null) ??
    null
  );
}

function Found({ rows, simulated }: { rows: RunRow[]; simulated: boolean }) {
  const read = rows.filter((r) => r.readings > 0).length;
  const undecided = rows.filter((r) => r.verdict === 'undecided');
  const published = rows.filter((r) => r.way === 'published').length;
  const judged = rows.filter((r) => r.verdict !== null).length;
  const title =
    judged === 0
      ? `${read} of ${plural(rows.length, 'run')} ${read === 1 ? 'has' : 'have'} readings; none is judged yet.`
      : `${judged} of ${plural(rows.length, 'run')} judged${undecided.length > 0 ? `, ${undecided.length} undecided` : ''}.`;
  const settle = undecidedWords(rows);
  return (
    <section className="mb-4 max-w-[900px]">
      <h2 className="mb-2 text-finding font-semibold">{title}</h2>
      {published > 0 ? (
        <p>{plural(published, 'verdict')} as published, without readings of this lab.</p>
      ) : null}
      {simulated && read > 0 ? <p>Simulated readings: made by the simulator, with noise.</p> : null}
      {settle.slice(0, 3).map((words) => (
        <p key={words} className="text-ink2">
          {words}
        </p>
      ))}
    </section>
  );
}

function NoRuns({ studyId }: { studyId: string }) {
  return (
    <EmptyState
      title="No runs yet"
      action={<KeyLink href={`/studies/${studyId}/sessions`}>To the sessions</KeyLink>}
    >
      Readings belong to runs, and runs follow once an approved series is laid out.
    </EmptyState>
  );
}
