import { AppError } from '../errors';
import { limitBreaches } from './breaches';
import type { Level, SeriesVersion, Study } from './types';

export const needsReference = (perturbs: Study['perturbs']) =>
  perturbs === 'animal' || perturbs === 'human volunteer';

/** The last day that the approval of this version covers, whatever the study says by now. */
export function approvedUntil(version: Pick<SeriesVersion, 'envelope'>): Date | null {
  return version.envelope?.lastDate ? new Date(version.envelope.lastDate) : null;
}

/** Refuses a series that may not be approved: limits, stop rules, and the reference where life is concerned. */
export function assertApprovable(
  study: Study,
  version: SeriesVersion,
  levels: Level[],
  now: Date,
): void {
  const breaches = limitBreaches(study, version, levels);
  if (breaches.length > 0) {
    throw new AppError('not-possible', breaches.join(' '), {
      at: 'levels',
      mend: 'Move or drop these levels; limits are the study’s and cannot be passed.',
    });
  }
  if (levels.length === 0) throw new AppError('not-possible', 'This version has no levels.');
  if (!study.stopRules.trim()) {
    throw new AppError('not-possible', 'The study has no stop rules.', {
      mend: 'Write on the System page when the bench must stop.',
    });
  }
  if (!needsReference(study.perturbs)) return;
  if (!study.approvalReference || !study.approvalExpires) {
    throw new AppError(
      'not-possible',
      `A study on ${study.perturbs === 'animal' ? 'animals' : 'human volunteers'} needs an approval reference and its expiry.`,
      { mend: 'Enter both on the System page.' },
    );
  }
  if (study.approvalExpires.getTime() <= now.getTime()) {
    throw new AppError(
      'not-possible',
      `The approval ${study.approvalReference} expired on ${study.approvalExpires.toISOString().slice(0, 10)}.`,
    );
  }
  if (study.ceilingDose === null) {
    throw new AppError('not-possible', 'A study on animals or volunteers needs a ceiling dose.');
  }
}
