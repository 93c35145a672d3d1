import { outlookAt } from '@/lib/planner/cadence/outlook';
import { planCadence } from '@/lib/planner/cadence/plan-cadence';
import { doseToControl } from '@/lib/sim/dose-map';
import type { DesignedLevel, DesignPlan } from './design-plan';

/** A dose with its control value and its timing: settling, record, interval, and what bites. */
export function timeLevel(
  plan: Pick<
    DesignPlan,
    'control' | 'timeUnit' | 'outlook' | 'noise' | 'settleCapMinutes' | 'recordCapMinutes'
  >,
  row: Pick<DesignedLevel, 'position' | 'dose' | 'purpose' | 'replicates'>,
): DesignedLevel {
  const control = doseToControl(plan.control.doseMap, row.dose);
  if (control === null) {
    throw new Error(`the dose map gives no control value at ${row.dose}`);
  }
  const outlook = outlookAt(plan.outlook, control, plan.timeUnit);
  const amplitude = plan.noise ? outlook.amplitude?.[plan.noise.readout] : undefined;
  const cadence = planCadence({
    growthRate: outlook.growthRate,
    period: outlook.period,
    ...(plan.noise && amplitude ? { noiseShare: plan.noise.sd / amplitude } : {}),
    ...(plan.settleCapMinutes ? { settleCap: plan.settleCapMinutes } : {}),
    ...(plan.recordCapMinutes ? { recordCap: plan.recordCapMinutes } : {}),
  });
  return {
    ...row,
    control,
    settleMinutes: cadence.settleMinutes,
    recordMinutes: cadence.recordMinutes,
    intervalMinutes: cadence.intervalMinutes,
    notes: cadence.notes.map((n) => n.text),
  };
}
