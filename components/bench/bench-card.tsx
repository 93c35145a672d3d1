'use client';

import clsx from 'clsx';
import { type ReactNode, useEffect, useRef } from 'react';
import { OnsetRibbon, type RibbonData } from '@/components/ribbon';
import { ActKey, StopKey } from './act-keys';
import { BenchHead, type BenchHeadProps } from './bench-head';
import { Countdown, type CountdownProps } from './countdown';
import { ExceptionKeys, type ExceptionKeysProps } from './exception-keys';
import { SessionRule, type SessionRuleProps } from './session-rule';
import { ValueField, type ValueFieldProps } from './value-field';

export type BenchCardProps = {
  rule: SessionRuleProps;
  head: BenchHeadProps;
  /** with its index pointer `here`; left out on a blinded card */
  ribbon?: RibbonData;
  /** changes with what the plate shows; the keyboard and the reader then go to the plate */
  stepKey: string;
  /** "Step 4 of 9" */
  step: string;
  instruction: ReactNode;
  /** care that belongs to this step */
  caution?: ReactNode;
  countdown?: CountdownProps;
  field?: ValueFieldProps;
  /** what comes next, in a line */
  next?: ReactNode;
  /** in place of the step: a note being written, a message, the end */
  panel?: ReactNode;
  exceptions: ExceptionKeysProps;
  stop?: { onStop: () => void; pending?: boolean; label?: string };
  /** named for what it records: "Sample taken" */
  act?: { label: string; onPress: () => void; pending?: boolean; disabled?: boolean };
  /** where it is saved */
  saved: ReactNode;
  undo?: { label: string; onUndo?: () => void };
};

/**
 * One step of a session at a time, for a gloved hand on an upright tablet of 820×1180; on a wide
 * screen the keys stand beside the plate, on a phone everything in one column.
 */
export function BenchCard(props: BenchCardProps) {
  const blinded = props.head.blindCode !== undefined;
  return (
    <div className="flex min-h-dvh flex-col">
      <SessionRule {...props.rule} />
      <main
        id="content"
        className="mx-auto grid w-full max-w-[820px] flex-1 grid-cols-1 gap-6 px-4 pt-6 pb-6 tablet:grid-rows-[1fr_auto] tablet:px-8 tablet:pb-[14px] desk:max-w-[1440px] desk:grid-cols-[minmax(0,1fr)_444px] desk:grid-rows-1 desk:gap-x-16 desk:px-16"
      >
        <div className="flex min-w-0 flex-col">
          <BenchHead {...props.head} />
          {props.ribbon && !blinded ? (
            <div className="mt-[11px] rounded-key border border-rule bg-plate py-2">
              <OnsetRibbon {...props.ribbon} size="card" width={754} />
            </div>
          ) : null}
          <Step {...props} />
        </div>
        <Acts {...props} />
      </main>
    </div>
  );
}

function Step(props: BenchCardProps) {
  // A caution and a field together need the room that the large counter would take.
  const tight = props.caution !== undefined && props.field !== undefined;
  const plate = useRef<HTMLElement>(null);
  const shown = useRef(props.stepKey);
  useEffect(() => {
    if (shown.current === props.stepKey) return;
    shown.current = props.stepKey;
    const section = plate.current;
    if (section && !section.contains(document.activeElement)) section.focus();
  }, [props.stepKey]);
  return (
    <section
      ref={plate}
      tabIndex={-1}
      aria-labelledby={props.panel ? undefined : 'bench-instruction'}
      aria-label={props.panel ? 'This session' : undefined}
      className="mt-4 flex flex-1 flex-col rounded-key border border-rule bg-plate p-4 tablet:min-h-[562px] tablet:px-[31px] tablet:pt-[21px] tablet:pb-5"
    >
      {props.panel ?? (
        <>
          <p className="text-bench text-ink2">{props.step}</p>
          <h2
            id="bench-instruction"
            className="mt-2 text-[28px] leading-9 font-medium tracking-[-0.01em] tablet:text-[36px] tablet:leading-11"
          >
            {props.instruction}
          </h2>
          {props.caution ? (
            <p className="mt-3 border-l-[3px] border-ink pl-4 text-bench">{props.caution}</p>
          ) : null}
          {props.countdown ? (
            <div className={tight ? 'mt-5' : 'mt-8 tablet:mt-[30px]'}>
              <Countdown {...props.countdown} tight={tight} />
            </div>
          ) : null}
          {props.field ? (
            <div className={tight ? 'mt-4' : 'mt-6'}>
              <ValueField {...props.field} />
            </div>
          ) : null}
          {props.next ? (
            <div className={clsx('text-bench text-ink2', tight ? 'mt-4' : 'mt-6')}>
              {props.next}
            </div>
          ) : null}
        </>
      )}
    </section>
  );
}

/** Exceptions, then Stop and the act with 96 px of nothing between them. */
function Acts(props: BenchCardProps) {
  return (
    <div className="flex min-w-0 flex-col">
      <ExceptionKeys {...props.exceptions} />
      <div className="mt-8 flex flex-col-reverse gap-12 tablet:mt-12 tablet:flex-row tablet:gap-24 desk:mt-auto desk:flex-col-reverse">
        {props.stop ? <StopKey {...props.stop} /> : null}
        {props.act ? (
          <div className="flex min-w-0 flex-1 justify-end desk:flex-none">
            <ActKey
              onPress={props.act.onPress}
              pending={props.act.pending}
              disabled={props.act.disabled}
            >
              {props.act.label}
            </ActKey>
          </div>
        ) : null}
      </div>
      <footer className="mt-2.5 flex flex-wrap justify-between gap-x-8 gap-y-1 text-[16px] leading-6 text-ink2">
        <span>{props.saved}</span>
        {props.undo ? <Undo {...props.undo} /> : null}
      </footer>
    </div>
  );
}

function Undo({ label, onUndo }: { label: string; onUndo?: () => void }) {
  if (!onUndo) return <span>{label}</span>;
  return (
    <button type="button" onClick={onUndo} className="min-h-6 underline underline-offset-4">
      {label}
    </button>
  );
}
