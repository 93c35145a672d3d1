import type { Envelope, Level, Scheme, Study } from './types';

/** The number of preparations that a series uses up. */
export function preparationsNeeded(scheme: Scheme, replicates: number, rows: number): number {
  return scheme === 'climb' ? replicates : replicates * rows;
}

/** What approving these levels allows: nothing beyond the doses, steps and numbers that were shown. */
export function envelopeOf(
  study: Pick<Study, 'ceilingDose' | 'largestStep' | 'approvalExpires'>,
  series: { scheme: Scheme; replicates: number },
  levels: Pick<Level, 'dose'>[],
): Envelope {
  const doses = levels.map((l) => l.dose);
  return {
    doseLow: Math.min(...doses),
    doseHigh: Math.max(...doses),
    ceilingDose: study.ceilingDose,
    largestStep: study.largestStep,
    preparations: preparationsNeeded(series.scheme, series.replicates, levels.length),
    lastDate: study.approvalExpires?.toISOString() ?? null,
  };
}
