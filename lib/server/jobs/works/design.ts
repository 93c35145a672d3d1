import type { DesignAnswer, DesignRequest } from '@/lib/contracts';
import { designEdges } from '@/lib/planner/design/design-edges';
import type { DesignedLevel, DesignPlan } from '../../series/design-plan';
import { timeLevel } from '../../series/time-level';
import type { Work } from '../kind';
import { proposeAll } from './propose';

export type DesignResult = {
  levels: DesignedLevel[];
  designs: { request: DesignRequest; answer: DesignAnswer }[];
  notes: string[];
};

/**
 * Chooses the levels of every edge, merges them into one order, and times each; after evidence, the
 * next levels within the approval instead.
 */
export const workDesign: Work = (input, progress) => {
  const plan = input as DesignPlan;
  if (plan.replan) return proposeAll(plan, plan.replan, progress);
  progress(0, plan.requests.length, 'choosing levels');
  const first = plan.requests[0];
  if (!first) throw new Error('a design needs at least one edge');
  const { range, order, limits, anchors, seed } = first;
  const merged = designEdges(plan.requests, { range, order, limits, anchors, seed });
  const result: DesignResult = {
    levels: merged.levels.map(({ edge: _, ...row }) => timeLevel(plan, row)),
    designs: plan.requests.map((request, i) => ({
      request,
      answer: {
        levels: merged.levels.flatMap(({ edge, ...row }) => (edge === i ? [row] : [])),
        expected: merged.expected[i]!,
        notes: merged.notes,
      },
    })),
    notes: merged.notes.map((n) => n.text),
  };
  return result;
};
