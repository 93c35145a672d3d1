import type { Level, SeriesVersion, Study } from './types';

/**
 * What stands against these levels, whatever proposed them: the study's ceiling dose and its largest
 * rising step. Asked again at design, at approval and at lay-out.
 */
export function limitBreaches(
  study: Pick<Study, 'ceilingDose' | 'largestStep' | 'doseUnit'>,
  series: Pick<SeriesVersion, 'order' | 'scheme'>,
  levels: Pick<Level, 'dose' | 'position'>[],
): string[] {
  const breaches: string[] = [];
  const { ceilingDose, largestStep, doseUnit } = study;
  const rows = [...levels].sort((a, b) => a.position - b.position);
  rows.forEach((row, i) => {
    if (ceilingDose !== null && row.dose > ceilingDose) {
      breaches.push(
        `Level ${row.position} (${row.dose} ${doseUnit}) lies above the ceiling of ${ceilingDose} ${doseUnit}.`,
      );
    }
    const before = rows[i - 1];
    const step = before ? row.dose - before.dose : 0;
    const slack = 1e-9 * Math.max(1, Math.abs(row.dose));
    if (before && series.scheme === 'climb' && largestStep !== null && step > largestStep + slack) {
      breaches.push(
        `The step from level ${before.position} to ${row.position} is ${Number(step.toPrecision(4))} ${doseUnit}, more than the largest step of ${largestStep} ${doseUnit}.`,
      );
    }
  });
  return breaches;
}
