import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { EmptyState, KeyLink, Plate } from '@/components/ui';
import { sessionsBetween, visitsOfSessions } from '@/db/queries/calendar';
import { onsetsOfStudies, placeOnRibbon } from '@/db/queries/ribbon-places';
import { approvedVersion } from '@/db/queries/series';
import { standingStops } from '@/db/queries/stops';
import { studyById } from '@/db/queries/studies';
import { figure, stampText, withUnit } from '@/lib/format';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { LayOutPanel } from './_components/lay-out-panel';
import { type SessionRow, SessionTable } from './_components/session-table';
import { StopPanel } from './_components/stop-panel';

export const metadata: Metadata = { title: 'Sessions' };

const EVER = { from: new Date('2000-01-01T00:00:00Z'), to: new Date('2100-01-01T00:00:00Z') };

async function rowsOf(of: { labId: string; studyId: string; zone: string }): Promise<SessionRow[]> {
  const db = database();
  const { labId, studyId } = of;
  const all = await sessionsBetween(db, { labId, studyId, ...EVER });
  const shown = all.filter((s) => s.state !== 'cancelled');
  const [visits, onsets] = await Promise.all([
    visitsOfSessions(db, { labId, sessionIds: shown.map((s) => s.id) }),
    onsetsOfStudies(db, { labId, studyIds: [studyId] }),
  ]);
  return shown.map((s) => ({
    id: s.id,
    from: s.startsAt.toISOString(),
    to: s.endsAt.toISOString(),
    run: s.runNumber,
    dose: withUnit(figure(s.dose), s.doseUnit),
    what: visits
      .filter((v) => v.sessionId === s.id)
      .map((v) => v.visit.label)
      .join(', '),
    rig: s.rig,
    person: s.person,
    state: s.state,
    place: placeOnRibbon(onsets, s.control),
  }));
}

/** Who, where, when: the study's sessions, what could not be placed, and its stops. */
export default async function SessionsPage({ params }: { params: Promise<{ studyId: string }> }) {
  const member = await pageMember();
  const { labId } = member;
  const zone = member.lab.timeZone;
  const { studyId } = await params;
  const db = database();
  const study = await studyById(db, { labId, studyId });
  if (!study) notFound();
  const [approved, rows, stops] = await Promise.all([
    approvedVersion(db, { labId, studyId }),
    rowsOf({ labId, studyId, zone }),
    standingStops(db, { labId, studyId }),
  ]);
  const lays = may(member, 'lay out');
  return (
    <div className="flex flex-col gap-6">
      <StopPanel
        studyId={studyId}
        rules={study.stopRules}
        lifts={may(member, 'lift stop')}
        stops={stops.map(({ stop, by }) => ({
          id: stop.id,
          by,
          at: stampText(stop.createdAt, zone),
          whole: stop.wholeStudy === 1,
          dose: stop.dose === null ? null : withUnit(figure(stop.dose), study.doseUnit),
        }))}
      />
      {approved?.unplaced?.length ? (
        <Plate title="Not placed">
          <ul className="flex flex-col gap-2">
            {approved.unplaced.map((u) => (
              <li key={u.what}>
                <span className="font-semibold">{u.what}</span>: {u.reason}
              </li>
            ))}
          </ul>
        </Plate>
      ) : null}
      {approved && lays ? (
        <LayOutPanel
          studyId={studyId}
          seriesVersionId={approved.id}
          number={approved.number}
          revision={approved.revision}
          laidOut={approved.laidOutAt ? stampText(approved.laidOutAt, zone) : null}
          zone={zone}
          expires={study.approvalExpires?.toISOString() ?? null}
        />
      ) : null}
      {rows.length > 0 ? (
        <SessionTable rows={rows} zone={zone} />
      ) : (
        <EmptyState
          title="No sessions yet"
          action={
            approved ? null : <KeyLink href={`/studies/${studyId}/series`}>To the series</KeyLink>
          }
        >
          {approved
            ? lays
              ? 'Lay out the approved series: each run gets its rig, its people and its times.'
              : 'An investigator or the head lays out the approved series.'
            : 'Sessions follow once the head has approved a version of the series.'}
        </EmptyState>
      )}
    </div>
  );
}
