import { GrowthChart, JoinedPlate } from '@/components/charts';
import { Caution, Finding, FindingAndTable, Plate } from '@/components/ui';
import type { PredictionRow } from '@/db/queries/predictions';
import type { StudyRow } from '@/db/queries/studies';
import { figure } from '@/lib/format';
import { type answerRibbon, fallingMap, firstReadout } from '@/lib/server/predictions/ribbon';
import { settlingNear } from '@/lib/server/predictions/settling';
import { criticalityWords, noOnsetWords, predictionSentence } from '@/lib/server/predictions/words';
import { controlToDose } from '@/lib/sim/dose-map';
import { OnsetTable } from './onset-table';
import { Provenance } from './provenance';
import { WaitingTable } from './waiting-table';

type ViewProps = {
  study: StudyRow;
  prediction: PredictionRow;
  ribbon: ReturnType<typeof answerRibbon>;
  at: string;
  actions: React.ReactNode;
};

/** Where, how fast, gentle or abrupt, how long to wait. */
export function PredictionView(props: ViewProps) {
  const { study, prediction, ribbon, at, actions } = props;
  const { answer, request } = prediction;
  const { model, control } = request;
  const units = {
    control: ribbon.unit,
    time: model.timeUnit,
    dose: study.doseUnit,
    doseLabel: study.doseLabel,
    falling: fallingMap(control),
  };
  const noOnset = answer.onsets.length === 0;
  const finding = (
    <Finding
      title={predictionSentence({
        answer,
        control,
        unit: ribbon.unit,
        label: ribbon.label,
        timeUnit: model.timeUnit,
      })}
      actions={actions}
    >
      {noOnset ? <p>{noOnsetWords(answer)}</p> : null}
      {[...new Set(answer.onsets.map((o) => criticalityWords(o, ribbon.unit)))].map((words) => (
        <p key={words} className="mb-2">
          {words}
        </p>
      ))}
      <Provenance
        systemNumber={prediction.systemNumber}
        draws={request.draws}
        seed={request.seed}
        engineVersion={prediction.engineVersion}
        by={prediction.askedByName}
        at={at}
      />
    </Finding>
  );
  return (
    <>
      <JoinedPlate {...ribbon} chart={amplitudeChart(prediction, ribbon.amplitude)} />
      <FindingAndTable
        finding={finding}
        table={
          <div className="flex flex-col gap-6">
            {noOnset ? null : <OnsetTable onsets={answer.onsets} units={units} />}
            <Notes notes={answer.notes} />
          </div>
        }
      />
      <Waiting {...props} units={units} />
      <Plate flush title="Growth rate along the steady state" className="mt-6">
        <GrowthChart
          from={control.from}
          to={control.to}
          unit={ribbon.unit}
          label={ribbon.label}
          timeUnit={model.timeUnit}
          branch={{
            control: answer.branch.control,
            growthRate: answer.branch.growthRate,
            stable: answer.branch.stable,
          }}
          onsets={answer.onsets.map((o) => o.value)}
        />
      </Plate>
      <div className="mt-6">
        <Caution />
      </div>
    </>
  );
}

type Amplitude = { control: number[]; value: number[] } | undefined;

function amplitudeChart({ request }: PredictionRow, amplitude: Amplitude) {
  if (!amplitude) return undefined;
  const predicted = { control: amplitude.control, amplitude: amplitude.value };
  return { amplitudeUnit: firstReadout(request.model).unit ?? '', predicted, observations: [] };
}

function Notes({ notes }: { notes: PredictionRow['answer']['notes'] }) {
  if (notes.length === 0) return null;
  return (
    <Plate title="What to know about it">
      <ul className="flex list-disc flex-col gap-2 pl-5">
        {notes.map((note) => (
          <li key={`${note.code} ${note.text}`} className="first-letter:uppercase">
            {sensibleDigits(note.text)}
          </li>
        ))}
      </ul>
    </Plate>
  );
}

/** Figures within prose, to four digits: the engine's notes carry more than a person reads. */
const sensibleDigits = (text: string) =>
  text.replace(/-?\d+\.\d+(?:e[-+]?\d+)?/g, (digits) => figure(Number(digits), 4));

type Units = { control: string; time: string; dose: string; doseLabel: string };

function Waiting({ prediction, units }: ViewProps & { units: Units }) {
  const { answer, request } = prediction;
  const rows = answer.onsets
    .flatMap((onset) => settlingNear(onset, request.control, answer.branch))
    .map((row) => ({ ...row, dose: controlToDose(request.control.doseMap, row.control) }));
  if (rows.length === 0) return null;
  return (
    <section className="mt-8 max-w-[960px]">
      <h2 className="mb-1 text-section font-semibold">How long to wait</h2>
      <p className="mb-3 max-w-[640px] text-ink2">
        Near an onset everything is slow. On the steady side a disturbance needs 3 to 4.6 time
        constants to die away (95 to 99 %); on the other side an oscillation needs as long to grow
        from 1 % to half of its size. A record that begins earlier shows the change of dose, not the
        level.
      </p>
      <WaitingTable rows={rows} units={units} />
    </section>
  );
}
