'use server';

import { z } from 'zod';
import { lostForm, remarkForm, startForm, undoForm, visitForm } from '@/lib/contracts/forms/bench';
import { labAction } from '@/lib/server/action';
import { recordVisit } from '@/lib/server/bench/record-visit';
import { reportLost } from '@/lib/server/bench/report-lost';
import { startSession } from '@/lib/server/bench/start-session';
import { undoVisit } from '@/lib/server/bench/undo-visit';
import { writeRemark } from '@/lib/server/bench/write-remark';
import { shown } from '@/lib/server/shown';
import { pressStop } from '@/lib/server/stops/press-stop';
import { takeBackStop } from '@/lib/server/stops/take-back';

export const startSessionAction = labAction({
  action: 'record session',
  input: startForm,
  handle: shown(startSession),
});
export const recordVisitAction = labAction({
  action: 'record session',
  input: visitForm,
  handle: shown(recordVisit),
});
export const undoVisitAction = labAction({
  action: 'record session',
  input: undoForm,
  handle: shown(undoVisit),
});
export const writeRemarkAction = labAction({
  action: 'record session',
  input: remarkForm,
  handle: shown(writeRemark),
});
export const reportLostAction = labAction({
  action: 'report lost',
  input: lostForm,
  handle: shown(reportLost),
});
export const pressStopAction = labAction({
  action: 'stop',
  input: z.strictObject({ studyId: z.uuid(), sessionId: z.uuid() }),
  handle: shown(pressStop),
});
export const slipAction = labAction({
  action: 'stop',
  input: z.strictObject({ stopId: z.uuid() }),
  handle: shown(takeBackStop),
});
