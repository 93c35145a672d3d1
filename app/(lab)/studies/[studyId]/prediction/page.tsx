import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { EmptyState, FailedState, KeyLink } from '@/components/ui';
import { latestPredictJob } from '@/db/queries/predictions';
import { studyById } from '@/db/queries/studies';
import { latestSystem } from '@/db/queries/systems';
import { stampText } from '@/lib/format';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { studyRibbon } from '@/lib/server/predictions/study-ribbon';
import { PredictPanel } from './_components/predict-panel';
import { PredictionView } from './_components/prediction-view';

export const metadata: Metadata = { title: 'Prediction' };

const DEFAULT_DRAWS = 400;
const DEFAULT_SEED = 1;

/** Where the study's system begins to oscillate, how fast, and how long to wait. */
export default async function PredictionPage({ params }: { params: Promise<{ studyId: string }> }) {
  const member = await pageMember();
  const { labId } = member;
  const { studyId } = await params;
  const db = database();
  const of = { labId, studyId };
  const study = await studyById(db, of);
  if (!study) notFound();
  const [system, shown, job] = await Promise.all([
    latestSystem(db, of),
    studyRibbon(db, { ...of, ceilingDose: study.ceilingDose }),
    latestPredictJob(db, of),
  ]);
  if (!system) notFound();
  const predicts = may(member, 'predict');
  const prediction = shown?.prediction ?? null;
  const stale = shown?.stale === true;
  const active = job?.state === 'queued' || job?.state === 'running' ? job : null;
  const failed = job?.state === 'failed' ? job : null;
  const panel = {
    studyId,
    systemNumber: system.number,
    activeJobId: active?.id ?? null,
    draws: prediction?.request.draws ?? DEFAULT_DRAWS,
    seed: prediction?.request.seed ?? DEFAULT_SEED,
    keyKind: prediction === null || stale ? ('filled' as const) : ('outlined' as const),
    keyName: prediction === null ? 'Predict' : 'Predict again',
  };
  return (
    <>
      {failed ? <Failed error={failed.error} studyId={studyId} kept={prediction !== null} /> : null}
      {shown === null ? (
        <NoPrediction
          predicts={predicts}
          working={active !== null}
          failed={failed !== null}
          panel={panel}
        />
      ) : (
        <>
          {stale ? (
            <p className="mb-4 border-l-[3px] border-ink bg-plate px-4 py-2">
              From System v{shown.prediction.systemNumber}; the newest is v{system.number}. Nothing
              below holds for v{system.number} until it is predicted again.
            </p>
          ) : null}
          <PredictionView
            study={study}
            prediction={shown.prediction}
            ribbon={shown.ribbon}
            at={stampText(shown.prediction.createdAt, member.lab.timeZone)}
            actions={
              predicts ? (
                <div className="flex w-full flex-col gap-6">
                  {stale || shown.prediction.answer.onsets.length === 0 ? null : (
                    <div>
                      <KeyLink href={`/studies/${studyId}/series`} kind="filled">
                        Go to the series
                      </KeyLink>
                    </div>
                  )}
                  <PredictPanel {...panel} compact />
                </div>
              ) : null
            }
          />
        </>
      )}
    </>
  );
}

function Failed(props: { error: string | null; studyId: string; kept: boolean }) {
  const { error, studyId, kept } = props;
  return (
    <div className="mb-6">
      <FailedState
        title="The prediction failed"
        safe={
          kept
            ? 'The earlier prediction below is kept as it was.'
            : 'The system is kept as it was; nothing else was changed.'
        }
        action={<KeyLink href={`/studies/${studyId}/system`}>Look at the system</KeyLink>}
      >
        <p>{error}</p>
      </FailedState>
    </div>
  );
}

type NoPredictionProps = {
  predicts: boolean;
  working: boolean;
  failed: boolean;
  panel: React.ComponentProps<typeof PredictPanel>;
};

/** What stands here before the first prediction; a failure has already said that there is none. */
function NoPrediction({ predicts, working, failed, panel }: NoPredictionProps) {
  const title = working ? 'The first prediction is being worked out' : 'Nothing predicted yet';
  if (!predicts) {
    return <EmptyState title={title}>The head or an investigator can predict.</EmptyState>;
  }
  return (
    <PredictPanel {...panel}>
      {failed ? null : (
        <div className="mb-6">
          <EmptyState title={title}>
            The prediction says where the steady state turns into a sustained oscillation, how sure
            that is, and how long to wait at each level.
          </EmptyState>
        </div>
      )}
    </PredictPanel>
  );
}
