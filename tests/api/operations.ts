import { v7 as uuid } from 'uuid';
import * as bench from '@/app/(bench)/sessions/[sessionId]/actions';
import * as calendar from '@/app/(lab)/calendar/actions';
import * as jobs from '@/app/(lab)/jobs-actions';
import * as labPages from '@/app/(lab)/lab/actions';
import * as studyPage from '@/app/(lab)/studies/[studyId]/actions';
import * as onset from '@/app/(lab)/studies/[studyId]/onset/actions';
import * as prediction from '@/app/(lab)/studies/[studyId]/prediction/actions';
import * as readings from '@/app/(lab)/studies/[studyId]/readings/actions';
import * as series from '@/app/(lab)/studies/[studyId]/series/actions';
import * as sessions from '@/app/(lab)/studies/[studyId]/sessions/actions';
import * as system from '@/app/(lab)/studies/[studyId]/system/actions';
import * as newStudy from '@/app/(lab)/studies/new/actions';
import type { ActionResult } from '@/lib/contracts';
import { chemostat } from '@/lib/sim/library/chemostat';
import type { Rule } from './role-table';

/** The ids that an operation may name; of one's own lab, of another's, or of nothing at all. */
export type Ids = {
  studyId: string;
  predictionId: string;
  seriesVersionId: string;
  revision: number;
  sessionId: string;
  sessionRevision: number;
  visitId: string;
  runId: string;
  stopId: string;
  jobId: string;
  userId: string;
  rigId: string;
  hoursId: string;
  absenceId: string;
};

export const unknownIds = (): Ids => ({
  studyId: uuid(),
  predictionId: uuid(),
  seriesVersionId: uuid(),
  revision: 1,
  sessionId: uuid(),
  sessionRevision: 1,
  visitId: uuid(),
  runId: uuid(),
  stopId: uuid(),
  jobId: uuid(),
  userId: uuid(),
  rigId: uuid(),
  hoursId: uuid(),
  absenceId: uuid(),
});

const AT = '2027-01-11T08:00:00Z';
const PAST = '2027-01-11T09:00:00Z';
const limits = {
  title: 'A title',
  summary: '',
  perturbs: 'chemical reaction' as const,
  rigId: null,
  doseLabel: 'Feed',
  doseUnit: 'mL/h',
  ceilingDose: 2,
  largestStep: 1,
  stopRules: 'Foam.',
  approvalReference: null,
  approvalExpires: null,
};
const rig = {
  name: 'Rig',
  place: 'Here',
  capacity: 1,
  skills: [],
  recordsItself: false,
  retired: false,
};
const hours = { days: ['MO' as const], from: '09:00', to: '17:00' };
const away = { from: AT, to: PAST, reason: 'away' };
const seriesRef = (i: Ids) => ({
  studyId: i.studyId,
  seriesVersionId: i.seriesVersionId,
  revision: i.revision,
});

export type Operation = {
  name: string;
  /** The exported action; each is named here, so that a new one is missed by the test of all. */
  action: unknown;
  rule: Rule;
  call: (ids: Ids) => Promise<ActionResult<unknown>>;
  /** What a stranger's id and an unknown one both answer, where it is not that there is none. */
  unknown?: 'invalid-input' | 'not-possible' | 'conflict';
};

type Act = (input: never) => Promise<ActionResult<unknown>>;

function op<A extends Act>(
  name: string,
  rule: Rule,
  action: A,
  input: (ids: Ids) => Parameters<A>[0],
  unknown?: Operation['unknown'],
): Operation {
  const call = (ids: Ids) => action(input(ids) as never);
  return { name, action, rule, call, ...(unknown ? { unknown } : {}) };
}

/** Every action of the program that names something of a lab. */
export const operations: Operation[] = [
  op('create a study', 'write system', newStudy.createStudy, (i) => ({
    ...limits,
    id: uuid(),
    from: { kind: 'study' as const, studyId: i.studyId },
  })),
  op('change a study', 'write system', studyPage.changeStudy, (i) => ({
    ...limits,
    studyId: i.studyId,
    reason: 'because',
  })),
  op('save a system', 'write system', system.saveSystem, (i) => ({
    id: uuid(),
    studyId: i.studyId,
    basedOn: 1,
    model: chemostat.model,
    control: chemostat.control,
    reason: 'because',
  })),
  op('predict', 'predict', prediction.askPrediction, (i) => ({
    studyId: i.studyId,
    systemNumber: 1,
    draws: 20,
    seed: 3,
  })),
  op('cancel a calculation', 'predict', jobs.cancelJob, (i) => ({ jobId: i.jobId }), 'conflict'),
  op('design a series', 'write series', series.askDesignAction, (i) => ({
    studyId: i.studyId,
    predictionId: i.predictionId,
    onsets: [0],
    scheme: 'climb' as const,
    order: 'ascending' as const,
    levels: 2,
    replicates: 1,
    doubtFactor: 2,
  })),
  op('submit a series', 'write series', series.submitSeriesAction, seriesRef),
  op('replan', 'write series', onset.askReplanAction, (i) => ({ studyId: i.studyId, levels: 2 })),
  op('approve a series', 'approve series', series.decideSeriesAction, (i) => ({
    ...seriesRef(i),
    decision: 'approve' as const,
    words: 'Good.',
  })),
  op('lay out', 'lay out', sessions.askLayOutAction, (i) => ({
    ...seriesRef(i),
    notBefore: AT,
    notAfter: '2027-02-11T08:00:00Z',
  })),
  op('move a session', 'move session', calendar.moveSessionAction, (i) => ({
    sessionId: i.sessionId,
    revision: i.sessionRevision,
    startsAt: '2027-01-20T08:00:00Z',
  })),
  op('start a session', 'record session', bench.startSessionAction, (i) => ({
    sessionId: i.sessionId,
    at: AT,
  })),
  op('record a visit', 'record session', bench.recordVisitAction, (i) => ({
    sessionId: i.sessionId,
    visitId: i.visitId,
    at: AT,
    outcome: 'done' as const,
    dose: 1,
  })),
  op('undo a visit', 'record session', bench.undoVisitAction, (i) => ({
    sessionId: i.sessionId,
    visitId: i.visitId,
  })),
  op('write a remark', 'record session', bench.writeRemarkAction, (i) => ({
    id: uuid(),
    studyId: i.studyId,
    sessionId: i.sessionId,
    kind: 'note' as const,
    text: 'It foams.',
  })),
  op('report a loss', 'report lost', bench.reportLostAction, (i) => ({
    sessionId: i.sessionId,
    at: AT,
    reason: 'dried out',
  })),
  op('stop at the bench', 'stop', bench.pressStopAction, (i) => ({
    studyId: i.studyId,
    sessionId: i.sessionId,
  })),
  op('stop a study', 'stop', sessions.stopStudyAction, (i) => ({ studyId: i.studyId })),
  op('slip at the bench', 'stop', bench.slipAction, (i) => ({ stopId: i.stopId })),
  op('take a stop back', 'stop', sessions.takeBackStopAction, (i) => ({ stopId: i.stopId })),
  op('lift a stop', 'lift stop', sessions.liftStopAction, (i) => ({
    stopId: i.stopId,
    reason: 'It is closed.',
  })),
  op('overrule a verdict', 'overrule verdict', readings.overruleVerdictAction, (i) => ({
    studyId: i.studyId,
    runId: i.runId,
    seenVerdictId: null,
    verdict: 'steady' as const,
    reason: 'I saw it.',
  })),
  op(
    'judge again',
    'upload readings',
    readings.judgeAgainAction,
    (i) => ({ studyId: i.studyId }),
    'not-possible',
  ),
  op(
    'judge again from the onset page',
    'upload readings',
    onset.judgeAgainAction,
    (i) => ({ studyId: i.studyId }),
    'not-possible',
  ),
  op('change a person', 'manage people', labPages.changeMembershipAction, (i) => ({
    userId: i.userId,
    role: 'observer' as const,
    skills: [],
    maxMinutesPerDay: null,
    minRestHours: null,
    active: true,
  })),
  op('change a rig', 'manage rigs', labPages.saveRigAction, (i) => ({ rigId: i.rigId, ...rig })),
  op('add hours', 'manage hours', labPages.addHoursAction, (i) => ({
    id: uuid(),
    userId: i.userId,
    rigId: null,
    ...hours,
  })),
  op('add opening hours', 'manage hours', labPages.addHoursAction, (i) => ({
    id: uuid(),
    userId: null,
    rigId: i.rigId,
    ...hours,
  })),
  op('remove hours', 'manage hours', labPages.removeHoursAction, (i) => ({ id: i.hoursId })),
  op('add an absence', 'manage hours', labPages.addAbsenceAction, (i) => ({
    id: uuid(),
    userId: i.userId,
    ...away,
  })),
  op('remove an absence', 'manage hours', labPages.removeAbsenceAction, (i) => ({
    id: i.absenceId,
  })),
];

/** Makes something in one's own lab and names nothing that is there. */
export const addPerson = op('add a person', 'manage people', labPages.addPersonAction, () => ({
  name: 'Petra New',
  email: `${uuid()}@example.org`,
  role: 'technician' as const,
  skills: [],
  password: 'long enough for this',
}));
