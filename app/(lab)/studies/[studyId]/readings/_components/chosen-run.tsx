import { RecordChart } from '@/components/charts';
import { VerdictLabel } from '@/components/marks';
import { Plate } from '@/components/ui';
import { figure, intervalText, stampText, withUnit } from '@/lib/format';
import type { RunRecord } from '@/lib/server/evidence/run-record';
import { markOf, type RunRow } from '@/lib/server/evidence/run-rows';
import { OverruleForm } from './overrule-form';
import type { RunUnits } from './run-table';

type Props = {
  studyId: string;
  row: RunRow;
  record: RunRecord | null;
  units: RunUnits;
  zone: string;
  simulated: boolean;
  overrules: boolean;
};

/** One run: its record, what it shows and why, and what was said of it before. */
export function ChosenRun(props: Props) {
  const { row, record, units, zone, simulated } = props;
  const mark = markOf(row);
  const decided = mark === 'lost' || mark === 'stopped' ? undefined : (mark ?? undefined);
  const title = `Run ${row.number}: ${withUnit(figure(row.dose, 4), units.dose)}, preparation ${row.preparation}`;
  return (
    <Plate title={title} id="run" className="mt-6">
      <p className="mb-3 text-ink2">
        {settingWords(row, zone)}
        {simulated && row.readings > 0 ? ' Simulated readings.' : ''}
      </p>
      {record ? (
        <>
          <RecordChart {...record.chart} timeUnit={units.time} state={decided} />
          <p className="mt-1 text-caption text-ink2">{record.said}</p>
        </>
      ) : (
        <p className="text-ink2">
          {row.way === 'published'
            ? 'Its verdict is as published; this lab has no readings of it.'
            : 'No readings came in for it yet.'}
        </p>
      )}
      <Reasons {...props} />
    </Plate>
  );
}

function settingWords({ setAt, way }: RunRow, zone: string): string {
  if (setAt) return `Dose set ${stampText(setAt, zone)}; every time counts from there.`;
  return way === 'published' ? '' : 'Its dose has not been set yet.';
}

function Reasons({ studyId, row, units, zone, overrules }: Props) {
  const { verdict, verdictId, history } = row;
  if (!verdict || !verdictId) return null;
  return (
    <div className="mt-4 grid gap-6 desk:grid-cols-2">
      <section>
        <h3 className="mb-2 font-semibold">What it shows</h3>
        <p className="mb-2">
          <VerdictLabel state={verdict} />
          {row.way === 'computed' ? null : <span className="text-ink2"> ({row.way})</span>}
        </p>
        <Figures row={row} units={units} />
        {overrules ? (
          <div className="mt-4">
            <OverruleForm
              key={verdictId}
              studyId={studyId}
              runId={row.id}
              runNumber={row.number}
              verdictId={verdictId}
              standing={verdict}
            />
          </div>
        ) : null}
      </section>
      <section>
        <h3 className="mb-2 font-semibold">What was said of it</h3>
        <ol className="flex flex-col gap-3">
          {history.map((h) => (
            <li key={h.id} className="border-l border-rule pl-3">
              <p>
                <span className="font-semibold">{h.verdict}</span>, {h.kind}
                {h.byName ? ` by ${h.byName}` : ''}
                <span className="text-ink2">
                  {' '}
                  {stampText(h.createdAt, zone)}
                  {h.engineVersion ? `, engine version ${h.engineVersion}` : ''}
                </span>
              </p>
              {h.reason ? <p>“{h.reason}”</p> : null}
              {h.answer?.reasons.map((reason) => (
                <p key={reason} className="text-ink2">
                  {reason}
                </p>
              ))}
            </li>
          ))}
        </ol>
      </section>
    </div>
  );
}

function Figures({ row, units }: { row: RunRow; units: RunUnits }) {
  const answer = row.computed?.answer;
  const lines: [string, string][] = [];
  if (row.period) lines.push(['Period', intervalText(row.period, { unit: units.time })]);
  if (row.growthRate) {
    lines.push(['Growth rate', intervalText(row.growthRate, { unit: `1/${units.time}` })]);
  }
  if (row.amplitude)
    lines.push(['Amplitude', intervalText(row.amplitude, { unit: units.amplitude })]);
  if (answer && answer.cyclesCovered > 0) {
    lines.push(['Cycles covered', figure(answer.cyclesCovered, 3)]);
    lines.push(['Readings a cycle', figure(answer.samplesPerCycle, 3)]);
  }
  if (lines.length === 0) return null;
  return (
    <dl className="grid grid-cols-[auto_1fr] gap-x-4 gap-y-1">
      {lines.map(([name, text]) => (
        <div key={name} className="contents">
          <dt className="text-ink2">{name}</dt>
          <dd className="font-mono">{text}</dd>
        </div>
      ))}
    </dl>
  );
}
