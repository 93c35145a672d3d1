import { Finding, FindingAndTable, KeyLink } from '@/components/ui';
import { type onsetView, undecidedWords } from '@/lib/server/evidence/onset-view';
import type { RunRow } from '@/lib/server/evidence/run-rows';
import { LevelTable, type LevelUnits } from './level-table';
import { ReplanPanel } from './replan-panel';

type Props = {
  study: { id: string; simulated: boolean };
  view: ReturnType<typeof onsetView>;
  rows: RunRow[];
  units: LevelUnits;
  replans: boolean;
  at: string;
};

/** What was found, how it agrees with the prediction, and what to do next, beside the levels. */
export function OnsetFinding({ study, view, rows, units, replans, at }: Props) {
  const inOrder = [...rows].sort((a, b) => a.control - b.control || a.number - b.number);
  const published = rows.some((r) => r.way === 'published');
  return (
    <FindingAndTable
      finding={
        <Finding
          title={view.words.finding}
          next={
            <>
              {undecidedWords(rows)
                .slice(0, 3)
                .map((words) => (
                  <p key={words} className="mb-1">
                    {words}
                  </p>
                ))}
              <p className="text-caption">
                {study.simulated ? 'Simulated readings. ' : ''}
                {published ? 'Verdicts marked published are from the literature. ' : ''}
                Worked out {at}.
              </p>
            </>
          }
          actions={
            <>
              {replans ? <ReplanPanel studyId={study.id} /> : null}
              {view.onsets.length > 0 ? <KeyLink href="#methods">Show methods</KeyLink> : null}
            </>
          }
        >
          <p>{view.words.paragraph}</p>
        </Finding>
      }
      table={<LevelTable studyId={study.id} rows={inOrder} units={units} />}
    />
  );
}
