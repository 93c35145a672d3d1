import { and, desc, eq, isNotNull, ne } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { booking, run, type study } from '@/db/schema';
import { audit } from '../audit';
import { AppError } from '../errors';
import type { Member } from '../member';
import { assertAdvance } from '../states';
import { shiftWindows, stayOf } from './run-times';

type Run = typeof run.$inferSelect;
type Study = typeof study.$inferSelect;
type Of = { member: Member; study: Study; run: Run; dose: number | null; at: Date };

/** Share of the planned dose by which a read-back may differ before it is taken for a slip. */
const READ_BACK_SHARE = 0.1;

/** The dose that this preparation had before, if it had one. */
async function doseBefore(tx: Transaction, of: Of): Promise<number | null> {
  const [before] = await tx
    .select({ dose: run.deliveredDose })
    .from(run)
    .where(
      and(
        eq(run.labId, of.member.labId),
        eq(run.preparationId, of.run.preparationId),
        ne(run.id, of.run.id),
        isNotNull(run.setAt),
      ),
    )
    .orderBy(desc(run.setAt))
    .limit(1);
  return before?.dose ?? null;
}

/** Limits hold at the bench too: neither ceiling nor largest step is passed by a typed figure. */
async function assertDose(tx: Transaction, of: Of): Promise<number> {
  const { study, run: r, dose } = of;
  const unit = study.doseUnit;
  if (study.approvalExpires && of.at > study.approvalExpires) {
    throw new AppError('not-possible', 'The approval of this study has expired. Set nothing.', {
      mend: 'The head decides what becomes of this run.',
    });
  }
  if (dose === null) {
    throw new AppError('invalid-input', 'Read the dose back from the rig and enter it.', {
      at: 'dose',
    });
  }
  if (study.ceilingDose !== null && dose > study.ceilingDose) {
    throw new AppError(
      'not-possible',
      `${dose} ${unit} lies above the ceiling of ${study.ceilingDose} ${unit}.`,
      { at: 'dose', mend: 'If the rig really stands there, turn it down now and press stop.' },
    );
  }
  const before = await doseBefore(tx, of);
  const step = before === null ? 0 : dose - before;
  const slack = 1e-9 * Math.max(1, Math.abs(dose));
  if (study.largestStep !== null && step > study.largestStep + slack) {
    throw new AppError(
      'not-possible',
      `From ${before} to ${dose} ${unit} is more than the largest step of ${study.largestStep} ${unit}.`,
      { at: 'dose', mend: 'Turn it back, and ask the investigator.' },
    );
  }
  if (Math.abs(dose - r.dose) > READ_BACK_SHARE * Math.max(Math.abs(r.dose), 1e-12)) {
    throw new AppError(
      'not-possible',
      `The plan says ${r.dose} ${unit}; ${dose} ${unit} is more than a tenth away from it.`,
      { at: 'dose', mend: 'Set it again and read it back; if it cannot be met, press stop.' },
    );
  }
  return dose;
}

/** The setting: who set which dose when, read back. Starts the run. */
export async function setDose(tx: Transaction, of: Of): Promise<void> {
  if (of.run.state === 'suspended') {
    throw new AppError('conflict', 'A stop holds this run. Set nothing.', {
      mend: 'Only the lab head lifts it.',
    });
  }
  const dose = await assertDose(tx, of);
  assertAdvance('run', of.run.state, 'settling');
  await tx
    .update(run)
    .set({ state: 'settling', setAt: of.at, setBy: of.member.userId, deliveredDose: dose })
    .where(eq(run.id, of.run.id));
  await shiftWindows(tx, of.run, of.at);
  await tx.update(booking).set(stayOf(of.run, of.at)).where(eq(booking.runId, of.run.id));
  await audit(tx, {
    labId: of.member.labId,
    actorId: of.member.userId,
    event: 'dose.set',
    studyId: of.study.id,
    subjectId: of.run.id,
    data: {
      planned: of.run.dose,
      delivered: dose,
      unit: of.study.doseUnit,
      at: of.at.toISOString(),
    },
  });
}
