import type { VisitKind } from '@/db/schema';

export type StepVisit = {
  id: string;
  kind: VisitKind;
  label: string;
  earliest: Date;
  latest: Date;
  atMinutes: number;
  doneAt: Date | null;
  outcome: 'done' | 'late' | 'skipped' | null;
};

/** One step of a session: an instruction, one act, at most one figure. */
export type Step = {
  key: string;
  visitId: string | null;
  kind: 'start' | VisitKind;
  instruction: string;
  act: string;
  next: string | null;
  due: string | null;
  earliest: string | null;
  latest: string | null;
  done: boolean;
  doneAt: string | null;
  outcome: 'done' | 'late' | 'skipped' | null;
};

type Facts = {
  preparation: string;
  rig: string;
  /** Dose in print, with unit. */
  dose: string;
  doseLabel: string;
  started: boolean;
  /** Instant from which the run's minutes count: the setting, or its planned start. */
  zero: Date;
  /** The appointment: nobody is there before it. */
  startsAt: Date;
};

const instructions: Record<VisitKind, (f: Facts, v: StepVisit) => { say: string; act: string }> = {
  'set dose': (f, v) => ({
    say: `Set ${f.doseLabel} to ${f.dose}, then read it back${extra(v.label)}`,
    act: 'Dose is set',
  }),
  sample: (f, v) => ({ say: `${v.label}: draw it from ${f.preparation}`, act: 'Sample taken' }),
  check: (f) => ({
    say: `Look at ${f.rig}: flow, level, temperature, leaks`,
    act: 'It runs as it should',
  }),
  collect: (f) => ({
    say: `Collect the record of ${f.preparation} from ${f.rig}`,
    act: 'Record collected',
  }),
};

/** What the plan adds to the setting itself: "start recording". */
function extra(label: string): string {
  const rest = label.replace(/^Set the dose[.,]?\s*/i, '');
  return rest === '' ? '' : `. ${rest.charAt(0).toUpperCase()}${rest.slice(1)}`;
}

/**
 * When a visit is due: its first one at the appointment, later ones at their own minute of the run,
 * though never before the appointment; inside the visit's own window. A setting has its run's times
 * move with it, so nothing holds it to a window.
 */
function dueAt(v: StepVisit, facts: Facts, first: boolean): string {
  const own = facts.zero.getTime() + v.atMinutes * 60_000;
  const begins = facts.startsAt.getTime();
  const due = first ? begins : Math.max(own, begins);
  if (v.kind === 'set dose') return new Date(due).toISOString();
  const held = Math.min(Math.max(due, v.earliest.getTime()), v.latest.getTime());
  return new Date(held).toISOString();
}

/** The steps of a session: check and start, then one a visit. */
export function stepsOf(visits: StepVisit[], facts: Facts): Step[] {
  const ordered = [...visits].sort((a, b) => a.atMinutes - b.atMinutes);
  const acts = ordered.map((v) => ({ v, ...instructions[v.kind](facts, v) }));
  const first = acts[0];
  const start: Step = {
    key: 'start',
    visitId: null,
    kind: 'start',
    instruction: `Check: preparation ${facts.preparation}, on ${facts.rig}, planned at ${facts.dose}`,
    act: 'It is the right one',
    next: first?.say ?? null,
    due: first ? dueAt(first.v, facts, true) : null,
    earliest: first?.v.earliest.toISOString() ?? null,
    latest: first?.v.latest.toISOString() ?? null,
    done: facts.started,
    doneAt: null,
    outcome: null,
  };
  return [
    start,
    ...acts.map(({ v, say, act }, i) => ({
      key: v.id,
      visitId: v.id,
      kind: v.kind,
      instruction: say,
      act,
      next: acts[i + 1]?.say ?? null,
      due: dueAt(v, facts, i === 0),
      earliest: v.earliest.toISOString(),
      latest: v.latest.toISOString(),
      done: v.doneAt !== null,
      doneAt: v.doneAt?.toISOString() ?? null,
      outcome: v.outcome,
    })),
  ];
}
