import type { ReactNode } from 'react';
import { Finding } from '@/components/ui';
import type { Level, seriesVersions } from '@/db/queries/series';
import { durationText, figure, withUnit } from '@/lib/format';
import type { Units } from './level-table';

type Version = Awaited<ReturnType<typeof seriesVersions>>[number];

const STATE_WORDS = {
  draft: 'a draft',
  submitted: 'waiting for approval',
  approved: 'approved',
  superseded: 'superseded',
} as const;

function hours(levels: Level[], climb: boolean): number {
  const total = levels.reduce((sum, l) => sum + l.settleMinutes + l.recordMinutes, 0);
  return climb ? total : Math.max(...levels.map((l) => l.settleMinutes + l.recordMinutes));
}

/** How well each onset will be known, beside equal spacing of as many levels. */
function Gain({ version, units }: { version: Version; units: Units }) {
  return (
    <>
      {version.designs.map(({ answer }) => {
        const { sd, low, high, equalSpacingSd } = answer.expected;
        const dose = (value: number, digits: number) => withUnit(figure(value, digits), units.dose);
        return (
          <p key={`${low} ${high}`} className="mb-2">
            Expected after it: the onset known to ±{dose(1.645 * sd, 2)} (90&nbsp;%), around{' '}
            {dose((low + high) / 2, 3)}. Equal spacing would give ±{dose(1.645 * equalSpacingSd, 2)}
            .
          </p>
        );
      })}
    </>
  );
}

/** What the series is, how long it takes, what it buys, and how it stands. */
export function SeriesFinding(props: {
  version: Version;
  levels: Level[];
  units: Units;
  actions: ReactNode;
  submitted: string | null;
  decided: string | null;
}) {
  const { version, levels, units } = props;
  const climb = version.scheme === 'climb';
  const count = `${levels.length} ${levels.length === 1 ? 'level' : 'levels'}`;
  const each = `${version.replicates} ${version.replicates === 1 ? 'preparation' : 'preparations'}`;
  return (
    <Finding
      title={`Version ${version.number}: ${count}, ${each}, ${STATE_WORDS[version.state]}.`}
      actions={props.actions}
      next={
        <>
          {props.submitted ? <p>Submitted {props.submitted}.</p> : null}
          {props.decided ? (
            <p>
              {version.inheritedFrom ? 'Inside the approved envelope, since ' : 'Decided '}
              {props.decided}
              {version.decider ? ` by ${version.decider}` : ''}.
              {version.decision ? ` “${version.decision}”` : ''}
            </p>
          ) : null}
        </>
      }
    >
      <p className="mb-2">
        {climb
          ? `Each preparation climbs through all levels, ${version.order}, and takes ${durationText(hours(levels, true))} of settling and recording.`
          : `A fresh preparation for each level, ${version.order}: the longest run takes ${durationText(hours(levels, false))}.`}
      </p>
      <Gain version={version} units={units} />
      {version.notes.map((n) => (
        <p key={n} className="mb-2 text-ink2">
          {n}
        </p>
      ))}
    </Finding>
  );
}
