import { peopleConflicts, timeNear } from './move-people';
import { gapConflicts, rigConflicts } from './move-rigs';
import type { Conflict, Move, MoveChange, MoveLab } from './move-types';
import { clockWords, DAY, parseInstant, parseZone } from './time';

export type {
  Conflict,
  ConflictCode,
  MoveChange,
  MoveLab,
  Occupation,
  PlacedSession,
} from './move-types';

const DEFAULT_ANCHOR = 8 * DAY;

function windowConflict(move: Move): Conflict[] {
  const { earliest, latest } = move.session;
  const from = earliest === undefined ? null : parseInstant(earliest, 'earliest');
  const to = latest === undefined ? null : parseInstant(latest, 'latest');
  const early = from !== null && move.span.from < from;
  const late = to !== null && move.span.from > to;
  if (!early && !late) return [];
  const at = (t: number) => timeNear(move, t, move.span.from);
  const window =
    from !== null && to !== null
      ? `${at(from)}–${sameDay(move, from, to)}`
      : from !== null
        ? `from ${at(from)}`
        : `until ${at(to!)}`;
  return [{ code: 'outside-window', text: `Outside the visit's window ${window}.` }];
}

function sameDay(move: Move, from: number, to: number): string {
  const text = timeNear(move, to, from);
  return text === clockWords(to, move.zone) ? text : timeNear(move, to, move.span.from);
}

function readMove(lab: MoveLab, change: MoveChange): Move | Conflict {
  const session = lab.sessions.find((s) => s.id === change.session);
  if (!session) {
    return { code: 'unknown-session', text: 'This session is no longer in the calendar.' };
  }
  const span = { from: parseInstant(change.from, 'from'), to: parseInstant(change.to, 'to') };
  if (span.to <= span.from) {
    return { code: 'ends-before-start', text: 'The session would end before it begins.' };
  }
  return {
    lab,
    zone: parseZone(lab.timeZone),
    anchor:
      lab.hoursFrom === undefined
        ? span.from - DEFAULT_ANCHOR
        : parseInstant(lab.hoursFrom, 'hoursFrom'),
    session,
    span,
    people: change.people ?? session.people,
    rig: change.rig === undefined ? session.rig : change.rig,
    occupation: change.occupation
      ? {
          from: parseInstant(change.occupation.from, 'occupation.from'),
          to: parseInstant(change.occupation.to, 'occupation.to'),
        }
      : null,
  };
}

/**
 * What stands against moving one session, in plain words; empty when it may be moved. Judges the
 * proposed state alone: conflicts elsewhere in the calendar are not reported.
 *
 * @throws EngineError `invalid-request` for instants, zones or hours that cannot be read
 */
export function conflictsOfMove(lab: MoveLab, change: MoveChange): Conflict[] {
  const move = readMove(lab, change);
  if ('code' in move) return [move];
  return [
    ...windowConflict(move),
    ...peopleConflicts(move),
    ...rigConflicts(move),
    ...gapConflicts(move),
  ];
}
