import type { LayOutRequest } from '../../contracts/lay-out';
import { allowedRigs, type Bounds, earliestPlace, startBounds } from './place';
import { type Job, type Problem, readProblem, type Visit } from './problem';
import { nextStaffed } from './staff';
import { State } from './state';
import { durationWords, momentWords } from './time';

const COUNT_WORDS = ['no', 'one', 'two', 'three', 'four', 'five', 'six'];
const countWords = (n: number) => COUNT_WORDS[n] ?? String(n);

function listWords(items: readonly string[], last = 'and'): string {
  if (items.length <= 1) return items[0] ?? '';
  return `${items.slice(0, -1).join(', ')} ${last} ${items[items.length - 1]}`;
}

const withSkills = (job: Job) =>
  job.skills.length === 0 ? '' : ` with ${job.skills.map((s) => `*${s}*`).join(' + ')}`;
const rigWords = (problem: Problem, rigs: readonly number[]) =>
  listWords(
    rigs.map((r) => problem.rigs[r]!.id),
    'or',
  );
const until = (problem: Problem) => momentWords(problem.notAfter, problem.zone);
const since = (problem: Problem) => momentWords(problem.notBefore, problem.zone);

function visitWords(visit: Visit): string {
  return visit.at === 0 ? 'the visit at the start' : `the visit ${durationWords(visit.at)} in`;
}

function waitsFor(state: State, job: Job): string | null {
  const missing = job.after.filter((a) => !state.placed[a.job]);
  if (missing.length === 0) return null;
  const names = missing.map((a) => `"${state.problem.jobs[a.job]!.id}"`);
  return `It follows ${listWords(names)}, which ${names.length > 1 ? 'are' : 'is'} not placed.`;
}

function lacksPeople(problem: Problem, job: Job): string | null {
  const needed = Math.max(0, ...job.visits.map((v) => v.people));
  const able = job.able.length;
  if (needed <= able) return null;
  const who = withSkills(job);
  if (able === 0) {
    return problem.people.length === 0
      ? 'Somebody must be there and the plan names no people.'
      : `Nobody${who} is among the people; one person needs all the skills asked for.`;
  }
  return `It needs ${countWords(needed)} people${who} at once; there ${able === 1 ? 'is' : 'are'} only ${countWords(able)}.`;
}

function lacksRig(problem: Problem, empty: State, job: Job, rigs: readonly number[]) {
  const { notBefore, notAfter } = problem;
  const stay = durationWords(job.duration);
  if (notAfter - notBefore < job.duration) {
    return `It takes ${stay}; the plan spans only ${durationWords(notAfter - notBefore)}.`;
  }
  const first = Math.min(
    ...rigs.map((r) => empty.problem.rigs[r]!.nextFree(notBefore, job.duration)),
  );
  if (first + job.duration <= notAfter) return null;
  return `${rigWords(problem, rigs)} is never free and open for ${stay} on end before ${until(problem)}.`;
}

function lacksStaff(problem: Problem, empty: State, job: Job): string | null {
  for (const visit of job.visits) {
    const first = problem.notBefore + visit.at;
    const limit = problem.notAfter - visit.duration;
    if (Number.isFinite(nextStaffed(empty, job, visit, first, limit))) continue;
    const span = `between ${since(problem)} and ${until(problem)}`;
    const stay = durationWords(visit.duration);
    return visit.people === 1
      ? `Nobody${withSkills(job)} works for ${stay} on end ${span} (${visitWords(visit)}).`
      : `It needs ${countWords(visit.people)} people${withSkills(job)} at once for ${stay}; so many never work together ${span}.`;
  }
  return null;
}

/** Rig and people each suffice, yet not together, even in an empty calendar. */
function neverTogether(problem: Problem, empty: State, job: Job): string | null {
  const all: Bounds = { from: problem.notBefore, to: problem.notAfter - job.duration };
  if (earliestPlace(empty, job, all)) return null;
  const on = rigWords(problem, job.rigs);
  for (const visit of job.visits) {
    if (earliestPlace(empty, { ...job, visits: [visit] }, all)) continue;
    const people = visit.people === 1 ? 'Nobody' : `No ${countWords(visit.people)} people`;
    return `${people}${withSkills(job)} can come to ${visitWords(visit)} at any time at which ${on} is free, before ${until(problem)}.`;
  }
  return `Its ${job.visits.length} visits cannot all be attended from any one start: together they miss the working hours, or break a daily maximum or a rest. Allow visits to begin later, or add people.`;
}

function gapTooTight(problem: Problem, empty: State, job: Job, bounds: Bounds): string | null {
  if (earliestPlace(empty, job, bounds)) return null;
  const names = job.after.map((a) => `"${problem.jobs[a.job]!.id}"`);
  const from = momentWords(bounds.from, problem.zone);
  if (!job.after.some((a) => Number.isFinite(a.gapMax))) {
    return `After ${listWords(names)} it cannot start before ${from}, and from then on rig and people are not free together before ${until(problem)}.`;
  }
  const to = momentWords(Math.max(bounds.from, bounds.to), problem.zone);
  return `After ${listWords(names)} it must start between ${from} and ${to}, and rig and people are not free together then. Widen the gap or the hours.`;
}

function crowdedOut(problem: Problem, state: State, job: Job, bounds: Bounds): string {
  const on = rigWords(problem, job.rigs);
  if (!earliestPlace(state, { ...job, visits: [] }, bounds)) {
    return `Other bookings hold ${on}: no ${durationWords(job.duration)} on end are left before ${until(problem)}.`;
  }
  const anywhere = { ...job, rigs: problem.rigs.map((_, r) => r), group: [job.index] };
  if (!earliestPlace(state, anywhere, bounds)) {
    return `Other bookings take the people${withSkills(job)} whenever a rig is free before ${until(problem)}.`;
  }
  return `When ${on} is free, other bookings take the people${withSkills(job)}, up to ${until(problem)}.`;
}

/** Says, in words a head can act on, why a booking has no place in the finished plan. */
export function diagnosis(request: LayOutRequest, state: State): (index: number) => string {
  const { problem } = state;
  const empty = new State(readProblem(request));
  empty.misses = state.misses;
  return (index) => {
    const asked = problem.jobs[index]!;
    const early = waitsFor(state, asked) ?? lacksPeople(problem, asked);
    if (early) return early;
    const rigs = allowedRigs(state, asked);
    if (rigs.length === 0) {
      const others = asked.group.filter((i) => i !== index && state.placed[i]);
      const names = others.map((i) => `"${problem.jobs[i]!.id}"`);
      return `It must stand on the same rig as ${listWords(names)}, which is none of its own rigs.`;
    }
    const job: Job = { ...asked, rigs, group: [index] };
    const alone =
      lacksRig(problem, empty, job, rigs) ??
      lacksStaff(problem, empty, job) ??
      neverTogether(problem, empty, job);
    if (alone) return alone;
    const bounds = startBounds(state, job)!;
    return gapTooTight(problem, empty, job, bounds) ?? crowdedOut(problem, state, job, bounds);
  };
}
