import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { Judging } from '@/components/evidence/judging';
import { Caution, EmptyState, KeyLink, Plate } from '@/components/ui';
import { newestJob } from '@/db/queries/active-job';
import { estimateHistory, latestEstimate, type OnsetEstimate } from '@/db/queries/estimates';
import { approvedVersion } from '@/db/queries/series';
import { studyById } from '@/db/queries/studies';
import { stampText } from '@/lib/format';
import { database } from '@/lib/server/database';
import { followedJob } from '@/lib/server/evidence/followed-job';
import { onsetView } from '@/lib/server/evidence/onset-view';
import { runRows } from '@/lib/server/evidence/run-rows';
import { may, pageMember } from '@/lib/server/member';
import { studyRibbon } from '@/lib/server/predictions/study-ribbon';
import { engineVersion } from '@/lib/sim/engine-version';
import { History } from './_components/history';
import { MethodTables } from './_components/method-table';
import { OnsetFinding } from './_components/onset-finding';
import { OnsetPlate } from './_components/onset-plate';
import { judgeAgainAction } from './actions';

export const metadata: Metadata = { title: 'Onset' };

/** The predicted onset beside the observed one, and what to do next. */
export default async function OnsetPage({ params }: { params: Promise<{ studyId: string }> }) {
  const member = await pageMember();
  const { labId } = member;
  const zone = member.lab.timeZone;
  const { studyId } = await params;
  const db = database();
  const of = { labId, studyId };
  const study = await studyById(db, of);
  if (!study) notFound();
  const [shown, estimate, past, rows, job, approved] = await Promise.all([
    studyRibbon(db, { ...of, ceilingDose: study.ceilingDose }),
    latestEstimate(db, of),
    estimateHistory(db, of),
    runRows(db, of),
    newestJob(db, { ...of, kind: 'evidence' }),
    approvedVersion(db, of),
  ]);
  if (!shown) return <NoPrediction studyId={studyId} />;
  const { prediction, ribbon } = shown;
  const stale = estimate ? staleWords(estimate, prediction.id) : null;
  const judging = (
    <Judging
      studyId={studyId}
      job={followedJob(job)}
      stale={stale}
      again={may(member, 'upload readings') ? judgeAgainAction : null}
    />
  );
  const seen = rows.filter((r) => r.verdict !== null || r.readings > 0);
  if (!estimate) {
    return (
      <>
        {judging}
        <NoVerdict studyId={studyId} read={seen.length > 0} />
      </>
    );
  }
  const { model } = prediction.request;
  const view = onsetView(estimate, { answer: prediction.answer, unit: ribbon.unit, rows });
  return (
    <>
      {judging}
      <OnsetPlate ribbon={ribbon} model={model} rows={rows} onsets={view.onsets} />
      <OnsetFinding
        study={study}
        view={view}
        rows={seen}
        units={{
          control: ribbon.unit,
          dose: study.doseUnit,
          doseLabel: study.doseLabel,
          time: model.timeUnit,
        }}
        replans={may(member, 'write series') && approved !== null}
        at={stampText(estimate.createdAt, zone)}
      />
      <Notes notes={view.notes} />
      {view.onsets.length > 0 ? <MethodTables onsets={view.onsets} unit={ribbon.unit} /> : null}
      <History
        from={ribbon.from}
        to={ribbon.to}
        unit={ribbon.unit}
        past={past
          .map((p) => ({
            id: p.id,
            runs: p.runsJudged,
            at: stampText(p.createdAt, zone),
            onsets: p.answers.flatMap((a) => a.onsets.map((o) => o.onset)),
          }))
          .reverse()}
      />
      <div className="mt-6">
        <Caution />
      </div>
    </>
  );
}

function Notes({ notes }: { notes: string[] }) {
  if (notes.length === 0) return null;
  return (
    <Plate title="What to know about it" className="mt-6">
      <ul className="flex list-disc flex-col gap-2 pl-5">
        {notes.map((note) => (
          <li key={note}>{note}</li>
        ))}
      </ul>
    </Plate>
  );
}

/** Why an estimate should be worked out anew; null while it stands. */
function staleWords(estimate: OnsetEstimate, predictionId: string): string | null {
  if (estimate.predictionId !== predictionId) {
    return 'The onset below was set against an earlier prediction.';
  }
  if (estimate.engineVersion !== engineVersion) {
    return `The onset below was worked out by engine version ${estimate.engineVersion}; this is version ${engineVersion}.`;
  }
  return null;
}

function NoPrediction({ studyId }: { studyId: string }) {
  return (
    <EmptyState
      title="Nothing predicted yet"
      action={<KeyLink href={`/studies/${studyId}/prediction`}>To the prediction</KeyLink>}
    >
      The observed onset stands beside the predicted one; the prediction comes first.
    </EmptyState>
  );
}

function NoVerdict({ studyId, read }: { studyId: string; read: boolean }) {
  return (
    <EmptyState
      title="No run has a verdict yet"
      action={<KeyLink href={`/studies/${studyId}/readings`}>To the readings</KeyLink>}
    >
      {read
        ? 'The onset follows once the records are judged.'
        : 'The onset follows from what the runs show: steady below, sustained above, and how fast a nudge dies away.'}
    </EmptyState>
  );
}
