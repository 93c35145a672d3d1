import { EngineError } from '../../contracts/common';
import type { LayOutRequest } from '../../contracts/lay-out';
import type { Job } from './problem';

function refuse(text: string, at: string): never {
  throw new EngineError('invalid-request', text, at);
}

function uniqueIds(items: readonly { id: string }[], at: string): Set<string> {
  const seen = new Set<string>();
  items.forEach((item, i) => {
    if (seen.has(item.id)) refuse(`The id "${item.id}" stands twice in ${at}.`, `${at}.${i}.id`);
    seen.add(item.id);
  });
  return seen;
}

/** Every id must be unique where it is given and known where it is used. */
export function checkReferences(request: LayOutRequest): void {
  const bookings = uniqueIds(request.bookings, 'bookings');
  const rigs = uniqueIds(request.rigs, 'rigs');
  const people = uniqueIds(request.people, 'people');
  request.bookings.forEach((b, i) => {
    const at = `bookings.${i}`;
    b.rigs.forEach((id, k) => {
      if (!rigs.has(id)) refuse(`There is no rig "${id}".`, `${at}.rigs.${k}`);
    });
    if (b.sameRigAs !== undefined && !bookings.has(b.sameRigAs)) {
      refuse(`There is no booking "${b.sameRigAs}".`, `${at}.sameRigAs`);
    }
    b.after?.forEach((a, k) => {
      if (!bookings.has(a.id)) refuse(`There is no booking "${a.id}".`, `${at}.after.${k}.id`);
      if (a.gapMax !== undefined && a.gapMax < a.gapMin) {
        refuse('gapMax must not be smaller than gapMin.', `${at}.after.${k}.gapMax`);
      }
    });
  });
  request.busy?.forEach((b, i) => {
    if (b.rig === undefined && b.person === undefined) {
      refuse('A busy stretch names a rig, a person or both.', `busy.${i}`);
    }
    if (b.rig !== undefined && !rigs.has(b.rig))
      refuse(`There is no rig "${b.rig}".`, `busy.${i}.rig`);
    if (b.person !== undefined && !people.has(b.person)) {
      refuse(`There is no person "${b.person}".`, `busy.${i}.person`);
    }
  });
}

/** Bookings in the order of the request, but none before one that it follows. */
export function topologicalOrder(jobs: readonly Job[]): number[] {
  const waiting = jobs.map((j) => j.after.length);
  const order: number[] = [];
  const ready = jobs.filter((j) => j.after.length === 0).map((j) => j.index);
  for (let i = 0; i < ready.length; i++) {
    const job = ready[i]!;
    order.push(job);
    for (const next of jobs[job]!.followers) {
      waiting[next]! -= 1;
      if (waiting[next] === 0) ready.push(next);
    }
  }
  if (order.length === jobs.length) return order;
  const stuck = findCycle(jobs, waiting);
  const names = stuck.map((i) => `"${jobs[i]!.id}"`).join(' after ');
  refuse(
    `These bookings wait for each other: ${names} after "${jobs[stuck[0]!]!.id}".`,
    `bookings.${stuck[0]}.after`,
  );
}

/** Walks back through unfinished predecessors until one comes round again. */
function findCycle(jobs: readonly Job[], waiting: readonly number[]): number[] {
  const path: number[] = [];
  let at = waiting.findIndex((w) => w > 0);
  while (!path.includes(at)) {
    path.push(at);
    at = jobs[at]!.after.find((a) => waiting[a.job]! > 0)!.job;
  }
  return path.slice(path.indexOf(at));
}
