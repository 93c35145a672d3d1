import type { DesignAnswer, DesignedLevel, DesignRequest, Note, Verdict } from '@/lib/contracts';
import { design, designAvoiding } from '../design/design';
import type { Belief } from './belief';
import { controlDraws } from './belief';
import type { Envelope } from './within-envelope';
import { withinEnvelope } from './within-envelope';

export type DoneLevel = { dose: number; verdict: Verdict | null };

export type ReplanInput = {
  /** The onset after the evidence so far, control axis. */
  onset: Belief;
  /** Control value to dose; null: out of the rig's reach. */
  toDose: (control: number) => number | null;
  /** Side on which the system oscillates, dose axis. */
  oscillates: 'above' | 'below';
  range: [number, number];
  order: DesignRequest['order'];
  /** Onset levels wanted, and preparations each. */
  count: number;
  replicates: number;
  blur?: number;
  /** `start`: the dose in force now. */
  limits?: DesignRequest['limits'];
  envelope: Envelope;
  done: readonly DoneLevel[];
  seed?: number;
};

export type ProposedLevel = DesignedLevel & { why: string };
export type Proposal = {
  levels: ProposedLevel[];
  expected: DesignAnswer['expected'] | null;
  /** Share of the draws whose onset no dose reaches. */
  unreachable: number;
  notes: Note[];
};

const shown = (x: number) => String(Number(x.toPrecision(4)));
const decided = (level: DoneLevel) => level.verdict !== null && level.verdict !== 'undecided';

function sdOf(values: readonly number[]): number {
  const mean = values.reduce((s, x) => s + x, 0) / values.length;
  return Math.sqrt(values.reduce((s, x) => s + (x - mean) ** 2, 0) / values.length);
}

const least = (a: number | null | undefined, b: number | null | undefined) => {
  const known = [a, b].filter((x): x is number => typeof x === 'number');
  return known.length > 0 ? Math.min(...known) : undefined;
};

/** Whether a decided level already marks that end of the range, so that no anchor is due there. */
function anchorsDue(input: ReplanInput, doses: readonly number[]) {
  const sorted = [...doses].sort((a, b) => a - b);
  const [low, high] = [sorted[0]!, sorted.at(-1)!];
  const steadySide = (d: number) => (input.oscillates === 'above' ? d < low : d > high);
  const farSide = (d: number) => (input.oscillates === 'above' ? d > high : d < low);
  const steady = (v: Verdict | null) => v === 'steady' || v === 'damped';
  return {
    below: input.done.some((l) => steady(l.verdict) && steadySide(l.dose)) ? 0 : 1,
    above: input.done.some((l) => l.verdict === 'sustained' && farSide(l.dose)) ? 0 : 1,
  };
}

/** The design request within range, envelope and limits; null where these exclude one another. */
function requestFor(input: ReplanInput, doses: number[]): DesignRequest | null {
  const { envelope, limits } = input;
  const lo = Math.max(input.range[0], envelope.doseLow);
  const hi = Math.min(input.range[1], envelope.doseHigh);
  if (!(lo < hi)) return null;
  const ordered = input.order !== 'randomised';
  return {
    onset: { values: doses },
    oscillates: input.oscillates,
    range: [lo, hi],
    order: input.order,
    levels: input.count,
    replicates: input.replicates,
    blur: input.blur ?? 0,
    doubt: 0,
    limits: {
      ...limits,
      ceiling: least(limits?.ceiling, envelope.ceiling),
      largestStep: ordered ? least(limits?.largestStep, envelope.largestStep) : undefined,
      // Rungs outside the approved doses would break the envelope as well as levels do.
      ...(limits?.grid ? { grid: limits.grid.filter((d) => d >= lo && d <= hi) } : {}),
    },
    anchors: anchorsDue(input, doses),
    seed: input.seed ?? 1,
  };
}

/** Distance within which a dose counts as the same level again. */
function sameLevel(request: DesignRequest, doses: number[]): number {
  const [lo, hi] = request.range;
  const fine = Math.min(0.1 * sdOf(doses), 0.01 * (hi - lo));
  return Math.max(fine, 1e-9 * (hi - lo));
}

/** A design whose onset levels repeat no decided dose. */
function freshDesign(request: DesignRequest, settled: number[], near: number): DesignAnswer {
  const first = design(request);
  const repeats = first.levels.some(
    (l) => l.purpose === 'onset' && settled.some((s) => Math.abs(l.dose - s) < near * (1 - 1e-9)),
  );
  return repeats ? designAvoiding(request, { doses: settled, near }) : first;
}

function reason(level: DesignedLevel, input: ReplanInput, doses: number[], near: number): string {
  const dose = shown(level.dose);
  if (level.purpose === 'approach') return `${dose} keeps the rise within the largest step.`;
  if (level.purpose === 'baseline') {
    return `${dose} gives the steady baseline that no decided level gives yet.`;
  }
  if (level.purpose === 'far side') {
    return `${dose} shows the oscillation well beyond the onset, which no decided level shows yet.`;
  }
  const below = doses.filter((d) => d <= level.dose).length / doses.length;
  const share = Math.round(100 * (input.oscillates === 'above' ? below : 1 - below));
  const again = input.done.some((l) => !decided(l) && Math.abs(l.dose - level.dose) <= near);
  const chance = `it has a ${share} % chance to read sustained, so either verdict narrows the onset`;
  return again ? `${dose} was left undecided; ${chance}.` : `${dose}: ${chance}.`;
}

const nothing = (unreachable: number, note: Note): Proposal => ({
  levels: [],
  expected: null,
  unreachable,
  notes: [note],
});

function reachNotes(input: ReplanInput, doses: number[], unreachable: number): Note[] {
  const notes: Note[] = [];
  const { doseLow, doseHigh } = input.envelope;
  const outside = doses.filter((d) => d < doseLow || d > doseHigh).length / doses.length;
  if (outside > 0.1) {
    const text = `${Math.round(100 * outside)} % of the estimated onset lies outside the approved doses: a new approval would let the series reach it.`;
    notes.push({ code: 'outside-envelope', text });
  }
  if (unreachable > 0) {
    const text = `${Math.round(100 * unreachable)} % of the estimated onset is out of the dose map's reach.`;
    notes.push({ code: 'dose-unreachable', text });
  }
  return notes;
}

/**
 * The next levels after the evidence so far, chosen by `design` within the approved envelope, each
 * with a sentence that says why. Levels already decided are not set again; undecided ones may be.
 * Anchors come only where no decided level stands in for them.
 */
export function proposeLevels(input: ReplanInput): Proposal {
  const controls = controlDraws(input.onset);
  const doses = controls.map(input.toDose).filter((d): d is number => d !== null);
  const unreachable = controls.length > 0 ? 1 - doses.length / controls.length : 1;
  if (doses.length === 0) {
    const text = 'No dose reaches the onset as it is now estimated: widen the rig or the dose map.';
    return nothing(1, { code: 'dose-unreachable', text });
  }
  const request = requestFor(input, doses);
  if (request === null) {
    const text = `The approved doses, ${shown(input.envelope.doseLow)} to ${shown(input.envelope.doseHigh)}, leave nothing of the range: a new approval is needed.`;
    return nothing(unreachable, { code: 'outside-envelope', text });
  }
  const near = sameLevel(request, doses);
  const settled = input.done.filter(decided).map((l) => l.dose);
  const answer = freshDesign(request, settled, near);
  const notes = [...answer.notes, ...reachNotes(input, doses, unreachable)];
  const kept = withinEnvelope(
    answer.levels,
    input.envelope,
    input.limits?.start,
    input.order !== 'randomised',
  );
  if (!kept.ok) {
    const text = `The dose in force now cannot be left within the approval: ${kept.breaches[0]!.text}`;
    return nothing(unreachable, { code: 'outside-envelope', text });
  }
  const levels = answer.levels.map((level) => ({
    ...level,
    why: reason(level, input, doses, near),
  }));
  return { levels, expected: answer.expected, unreachable, notes };
}
