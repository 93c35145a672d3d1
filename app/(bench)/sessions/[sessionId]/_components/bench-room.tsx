'use client';

import { useCallback, useEffect, useState } from 'react';
import { BenchCard, type BenchCardProps } from '@/components/bench';
import { useAction } from '@/components/forms';
import { clockText } from '@/lib/format';
import {
  pressStopAction,
  recordVisitAction,
  slipAction,
  startSessionAction,
  undoVisitAction,
} from '../actions';
import { EndPanel } from './end-panel';
import { HeldPanel } from './held-panel';
import { LostPanel, NotePanel, SkipPanel } from './panels';
import type { BenchRoomProps, BenchStep } from './types';

type Open = 'note' | 'skip' | 'lost' | null;
const UNDO_MS = 60_000;
const TRACK_MS = 60 * 60_000;

const iso = (ms: number) => new Date(ms).toISOString();

/** The countdown of a step that has a time of its own. */
function countdownOf(step: BenchStep, props: BenchRoomProps): BenchCardProps['countdown'] {
  if (!step.due || !step.earliest || !step.latest) return undefined;
  const due = Date.parse(step.due);
  const latest = Date.parse(step.latest);
  const from = Math.min(Date.parse(props.now), due) - TRACK_MS / 2;
  return {
    now: props.now,
    zone: props.zone,
    what: step.kind === 'sample' ? 'the sample' : 'this step',
    due: step.due,
    earliest: step.earliest,
    latest: step.latest,
    trackFrom: iso(from),
    trackTo: iso(Math.max(latest, due) + TRACK_MS / 2),
  };
}

/** One session at the bench: the step in hand, its one act, and what else may happen. */
export function BenchRoom(props: BenchRoomProps) {
  const { steps, session, studyId } = props;
  const [open, setOpen] = useState<Open>(null);
  const [value, setValue] = useState('');
  const [undoable, setUndoable] = useForAMinute();
  const [stopped, setStopped] = useState<string | null>(null);
  const close = useCallback(() => setOpen(null), []);
  const start = useAction(startSessionAction);
  const record = useAction(recordVisitAction, { onDone: () => setValue('') });
  const undo = useAction(undoVisitAction, { onDone: () => setUndoable(null) });
  const stop = useAction(pressStopAction, { onDone: (s) => setStopped(s.stopId) });
  const slip = useAction(slipAction);
  const current = steps.findIndex((s) => !s.done);
  const step = steps[current];
  const pending = start.pending || record.pending;
  const problem = start.problem ?? record.problem ?? undo.problem ?? stop.problem ?? slip.problem;

  function act(outcome: 'done' | 'late' | 'skipped', remark = '') {
    if (!step) return;
    const at = new Date().toISOString();
    setOpen(null);
    if (!step.visitId) {
      void start.run({ sessionId: session.id, at });
      return;
    }
    setUndoable(step.visitId);
    const figure = value.trim() === '' ? null : Number(value.replace(',', '.'));
    const readout = props.readouts[0];
    void record.run({
      sessionId: session.id,
      visitId: step.visitId,
      at,
      outcome,
      remark,
      dose: step.kind === 'set dose' ? figure : null,
      values:
        step.kind === 'sample' && readout && figure !== null && outcome !== 'skipped'
          ? [{ readout: readout.symbol, value: figure }]
          : [],
    });
  }

  // A stop pressed here is shown here, even where this session itself was over already.
  const held = session.state === 'suspended' || props.stops.some((s) => s.id === stopped);
  const live = props.records && !held && step !== undefined && session.state !== 'cancelled';
  const field = step && live ? fieldOf(step, props, value, setValue) : undefined;
  const wrong =
    field !== undefined && value.trim() !== '' && !Number.isFinite(Number(value.replace(',', '.')));
  const mustFill = step?.kind === 'set dose' && value.trim() === '';
  const panel = panelOf(props, { open, close, act, step, held, slip });
  return (
    <BenchCard
      rule={{
        steps: steps.length,
        done: steps.map((s) => s.done),
        current: current < 0 ? steps.length : current,
        now: props.now,
        zone: props.zone,
      }}
      head={props.head}
      ribbon={props.ribbon}
      stepKey={`${step?.key ?? 'end'} ${open ?? ''} ${held ? 'held' : ''}`}
      step={step ? `Step ${current + 1} of ${steps.length}` : ''}
      instruction={step?.instruction ?? ''}
      caution={step?.kind === 'start' ? `Stop when: ${props.stopRules}` : cautionOf(step, props)}
      countdown={step && !held ? countdownOf(step, props) : undefined}
      field={
        field ? { ...field, problem: wrong ? 'Write a number.' : problemAt(problem) } : undefined
      }
      next={nextWords(step, problem, field !== undefined)}
      panel={panel}
      exceptions={{
        onLate: live && step.kind === 'sample' ? () => act('late', 'taken late') : undefined,
        onSkip:
          live && step.visitId && step.kind !== 'set dose' ? () => setOpen('skip') : undefined,
        onNote: props.records ? () => setOpen('note') : undefined,
        onLost: live && step.kind !== 'start' ? () => setOpen('lost') : undefined,
        disabled: pending,
      }}
      stop={
        held || session.state === 'cancelled'
          ? undefined
          : {
              onStop: () => void stop.run({ studyId, sessionId: session.id }),
              pending: stop.pending,
            }
      }
      act={
        live && open === null
          ? {
              label: step.act,
              onPress: () => act('done'),
              pending,
              disabled: wrong || mustFill,
            }
          : undefined
      }
      saved={savedWords(props, steps)}
      undo={
        undoable && !held && steps.find((s) => s.visitId === undoable)?.done
          ? {
              label: 'Undo, for a minute',
              onUndo: () => void undo.run({ sessionId: session.id, visitId: undoable }),
            }
          : undefined
      }
    />
  );
}

/** A value that is forgotten after the minute in which a press may be taken back. */
function useForAMinute() {
  const [value, setValue] = useState<string | null>(null);
  useEffect(() => {
    if (value === null) return;
    const timer = setTimeout(() => setValue(null), UNDO_MS);
    return () => clearTimeout(timer);
  }, [value]);
  return [value, setValue] as const;
}

const problemAt = (problem: { message: string; mend?: string } | null) =>
  problem ? `${problem.message} ${problem.mend ?? ''}`.trim() : undefined;

function nextWords(
  step: BenchStep | undefined,
  problem: { message: string; mend?: string } | null,
  inField: boolean,
) {
  const alone = problem !== null && !inField;
  if (!alone && !step?.next) return undefined;
  return (
    <>
      {alone ? (
        <span
          role="alert"
          className="mb-3 block border-l-[3px] border-ink pl-3 font-semibold text-ink"
        >
          {problemAt(problem)}
        </span>
      ) : null}
      {step?.next ? `Then: ${step.next}.` : null}
    </>
  );
}

function cautionOf(step: BenchStep | undefined, props: BenchRoomProps): string | undefined {
  if (step?.kind !== 'set dose') return undefined;
  const ceiling = props.ceiling ? `Never above ${props.ceiling}. ` : '';
  return `${ceiling}The prediction is an estimate; your protocol comes first.`;
}

function savedWords(props: BenchRoomProps, steps: BenchStep[]): string {
  const last = steps.filter((s) => s.doneAt).at(-1);
  if (!last?.doneAt) {
    return props.session.state === 'started'
      ? 'Saved, the session has begun'
      : 'Nothing recorded yet';
  }
  return `Saved, last step at ${clockText(last.doneAt, props.zone)}`;
}

function fieldOf(
  step: BenchStep,
  props: BenchRoomProps,
  value: string,
  onChange: (value: string) => void,
): BenchCardProps['field'] {
  if (step.kind === 'set dose') {
    const step_ =
      Math.abs(props.run.dose) > 0
        ? 10 ** (Math.floor(Math.log10(Math.abs(props.run.dose))) - 1)
        : 0.1;
    return {
      id: 'read-back',
      label: 'Read back from the rig',
      unit: props.head.doseUnit ?? '',
      value,
      onChange,
      step: step_,
      from: Number(props.run.dose.toPrecision(4)),
      usual: `planned ${props.head.dose}`,
    };
  }
  const readout = props.readouts[0];
  if (step.kind !== 'sample' || !readout || props.recordsItself) return undefined;
  return {
    id: 'reading',
    label: `${readout.symbol}, if measured now`,
    unit: readout.unit,
    value,
    onChange,
    step: 0.1,
  };
}

function panelOf(
  props: BenchRoomProps,
  of: {
    open: Open;
    close: () => void;
    act: (outcome: 'skipped', remark: string) => void;
    step: BenchStep | undefined;
    held: boolean;
    slip: { run: (input: { stopId: string }) => Promise<void>; pending: boolean };
  },
) {
  if (of.open === 'note') {
    return <NotePanel studyId={props.studyId} sessionId={props.session.id} onClose={of.close} />;
  }
  if (of.open === 'skip') {
    return <SkipPanel onSkip={(why) => of.act('skipped', why)} onClose={of.close} />;
  }
  if (of.open === 'lost') return <LostPanel sessionId={props.session.id} onClose={of.close} />;
  if (of.held) {
    return (
      <HeldPanel
        stops={props.stops}
        now={props.now}
        pending={of.slip.pending}
        onSlip={(stopId) => void of.slip.run({ stopId })}
      />
    );
  }
  if (!of.step || ['done', 'cancelled'].includes(props.session.state))
    return <EndPanel {...props} />;
  return undefined;
}
