import { layOut } from '@/lib/planner/lay-out/lay-out';
import type { LayOutPlan } from '../../lay-out/plan';
import type { Work } from '../kind';

/** Places the runs of a plan. */
export const workLayOut: Work = (input, progress) => {
  const { request } = input as LayOutPlan;
  progress(0, request.bookings.length, 'placing runs');
  return layOut(request);
};
