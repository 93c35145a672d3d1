import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { benchSession } from '@/db/queries/bench';
import { latestSystem } from '@/db/queries/systems';
import { figure, stampText, withUnit } from '@/lib/format';
import { stepsOf } from '@/lib/server/bench/steps';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { studyRibbon } from '@/lib/server/predictions/study-ribbon';
import { BenchRoom } from './_components/bench-room';

export const metadata: Metadata = { title: 'Session' };

/** "day 12, hour 277": counted from the setting, or as planned. */
function sinceDose(zero: Date, now: Date, set: boolean): string {
  const hours = (now.getTime() - zero.getTime()) / 3_600_000;
  if (!set) return 'dose not set yet';
  return `day ${Math.floor(hours / 24)}, hour ${Math.floor(hours)}`;
}

/** The bench card: one step at a time, for whoever stands there with gloves on. */
export default async function SessionPage({ params }: { params: Promise<{ sessionId: string }> }) {
  const member = await pageMember();
  const { labId } = member;
  const zone = member.lab.timeZone;
  const { sessionId } = await params;
  const db = database();
  const bench = await benchSession(db, { labId, sessionId });
  if (!bench) notFound();
  const { session, run, study, preparation, rig } = bench;
  const [shown, system] = await Promise.all([
    studyRibbon(db, { labId, studyId: study.id, ceilingDose: study.ceilingDose }),
    latestSystem(db, { labId, studyId: study.id }),
  ]);
  const now = new Date();
  const zero = run.setAt ?? run.plannedStart ?? session.startsAt;
  const dose = withUnit(figure(run.dose, 4), study.doseUnit);
  const readouts = system?.model.readouts?.length
    ? system.model.readouts
    : (system?.model.variables ?? []);
  const steps = stepsOf(bench.visits, {
    preparation: preparation.code,
    rig: rig.name,
    dose,
    doseLabel: study.doseLabel,
    started: session.state === 'started' || session.state === 'done',
    zero,
    startsAt: session.startsAt,
  });
  return (
    <BenchRoom
      now={now.toISOString()}
      zone={zone}
      studyId={study.id}
      session={{
        id: session.id,
        state: session.state,
        startsAt: session.startsAt.toISOString(),
        person: bench.person,
        mine: session.personId === member.userId,
      }}
      run={{
        id: run.id,
        number: run.number,
        state: run.state,
        dose: run.dose,
        set: run.setAt !== null,
      }}
      head={{
        identity:
          preparation.code.length <= 2 ? `Preparation ${preparation.code}` : preparation.code,
        line: study.title,
        tail: `, run ${run.number}${study.simulated ? ', simulated' : ''}`,
        dose: figure(run.dose, 4),
        doseUnit: study.doseUnit,
        control: shown ? { value: figure(run.control, 3), unit: shown.ribbon.unit } : undefined,
        when: sinceDose(zero, now, run.setAt !== null),
      }}
      ribbon={shown ? { ...shown.ribbon, here: run.control } : undefined}
      steps={steps}
      readouts={readouts.map((r) => ({ symbol: r.symbol, unit: r.unit ?? '' }))}
      recordsItself={rig.recordsItself}
      stopRules={study.stopRules}
      ceiling={
        study.ceilingDose === null ? null : withUnit(figure(study.ceilingDose), study.doseUnit)
      }
      records={may(member, 'record session')}
      remarks={bench.remarks.map(({ remark, by }) => ({
        id: remark.id,
        text: `${remark.text} (${by}, ${stampText(remark.createdAt, zone)})`,
      }))}
      stops={bench.stops.map(({ stop, by }) => ({
        id: stop.id,
        mine: stop.byId === member.userId,
        at: stop.createdAt.toISOString(),
        text: `${by} pressed stop, ${stampText(stop.createdAt, zone)}`,
      }))}
      doneBy={bench.visits.some((v) => v.doneBy === member.userId)}
    />
  );
}
