import { type DesignRequest, EngineError } from '@/lib/contracts';
import { type Proposal, proposeLevels } from '@/lib/planner/replan/propose-levels';
import { controlToDose } from '@/lib/sim/dose-map';
import type { DesignPlan, ReplanPart } from '../../series/design-plan';
import { timeLevel } from '../../series/time-level';
import type { DesignResult } from './design';

type Edge = { request: DesignRequest; proposal: Proposal };

function proposeEdge(plan: DesignPlan, replan: ReplanPart, i: number, start: number | undefined) {
  const request = plan.requests[i]!;
  const { range, order, oscillates, levels, replicates, blur, seed } = request;
  return proposeLevels({
    onset: replan.beliefs[i]!,
    toDose: (control) => controlToDose(plan.control.doseMap, control),
    oscillates,
    range,
    order,
    count: levels,
    replicates,
    blur,
    limits: { ...request.limits, ...(start === undefined ? {} : { start }) },
    envelope: replan.envelope,
    done: replan.done,
    seed,
  });
}

/**
 * The next levels of every edge, one edge after another in the order of the plan: each begins at the
 * dose that the one before leaves in force, so that no step between edges passes the limit either.
 */
export function proposeAll(
  plan: DesignPlan,
  replan: ReplanPart,
  progress: (done: number, total: number, stage: string) => void,
): DesignResult {
  const edges: Edge[] = [];
  const stepped = plan.scheme === 'climb';
  let start = plan.requests[0]?.limits?.start;
  plan.requests.forEach((request, i) => {
    progress(i, plan.requests.length, 'choosing the next levels');
    const proposal = proposeEdge(plan, replan, i, start);
    edges.push({ request, proposal });
    if (stepped) start = proposal.levels.at(-1)?.dose ?? start;
  });
  const rows = edges.flatMap((e) => e.proposal.levels);
  const notes = [...new Set(edges.flatMap((e) => e.proposal.notes.map((n) => n.text)))];
  if (rows.length === 0) {
    const why = notes.join(' ') || 'Every level that would tell more has a verdict already.';
    throw new EngineError('invalid-request', why);
  }
  return {
    levels: rows.map(({ why, ...row }, i) => {
      const { purpose, dose, replicates } = row;
      const timed = timeLevel(plan, { purpose, dose, replicates, position: i + 1 });
      return { ...timed, notes: [why, ...timed.notes] };
    }),
    designs: edges.flatMap(({ request, proposal }) =>
      proposal.expected
        ? [
            {
              request,
              answer: {
                levels: proposal.levels.map(({ why: _, ...row }) => row),
                expected: proposal.expected,
                notes: proposal.notes,
              },
            },
          ]
        : [],
    ),
    notes,
  };
}
