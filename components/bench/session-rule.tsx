'use client';

import Link from 'next/link';
import { useNow } from '@/components/ui/use-now';
import { clockText } from '@/lib/format';

export type SessionRuleProps = {
  /** number of steps */
  steps: number;
  /** steps that are done, by index; the others stay hollow */
  done: readonly boolean[];
  /** index of the step in hand; equal to `steps` when all are done */
  current: number;
  /** the server's instant, ISO */
  now: string;
  zone: string;
  back?: { href: string; label: string };
};

/** A square per step with the index below now; the only way out is back to Today. */
export function SessionRule({ steps, done, current, now, zone, back }: SessionRuleProps) {
  const instant = useNow(now, 10_000);
  const link = back ?? { href: '/today', label: 'Today' };
  return (
    <header className="h-14 border-b border-rule bg-well">
      <div className="mx-auto grid h-full max-w-[1440px] grid-cols-[auto_minmax(0,1fr)_auto] items-center gap-4 px-4 tablet:grid-cols-[118px_minmax(0,1fr)_98px] tablet:gap-0 tablet:px-8 desk:px-16">
        <Link href={link.href} className="flex min-h-12 items-center text-bench-key font-semibold">
          <span aria-hidden="true">{'\u2039'}&nbsp;</span>
          {link.label}
        </Link>
        <div
          className="mx-auto grid h-full w-full max-w-[540px]"
          style={{ gridTemplateColumns: `repeat(${Math.max(steps, 1)}, minmax(0, 1fr))` }}
          role="img"
          aria-label={
            current < steps ? `Step ${current + 1} of ${steps}` : `All ${steps} steps are done`
          }
        >
          {Array.from({ length: steps }, (_, i) => ({ step: i + 1, i })).map(({ step, i }) => (
            <Step
              key={step}
              done={done[i] ?? false}
              current={i === current}
              last={step === steps}
            />
          ))}
        </div>
        <span className="text-right font-mono text-bench-key font-semibold">
          {clockText(instant, zone)}
        </span>
      </div>
    </header>
  );
}

function Step({ done, current, last }: { done: boolean; current: boolean; last: boolean }) {
  return (
    <span className="relative block">
      <svg
        viewBox="0 0 16 16"
        aria-hidden="true"
        className="absolute top-3 left-1/2 w-[min(16px,70%)] -translate-x-1/2"
      >
        {current || done ? (
          <rect width={16} height={16} fill={current ? 'var(--index)' : 'var(--ink)'} />
        ) : (
          <rect
            x={1}
            y={1}
            width={14}
            height={14}
            fill="none"
            stroke="var(--ink2)"
            strokeWidth={1.75}
          />
        )}
      </svg>
      <span className="absolute inset-x-0 top-[34px] h-px bg-ink" />
      <span className="absolute top-[34px] left-0 h-[7px] w-px bg-ink" />
      {['25%', '50%', '75%'].map((left) => (
        <span
          key={left}
          className="absolute top-[34px] hidden h-1 w-px bg-ink tablet:block"
          style={{ left }}
        />
      ))}
      {last ? <span className="absolute top-[34px] right-0 h-[7px] w-px bg-ink" /> : null}
      {current ? (
        <svg
          width={14}
          height={9}
          viewBox="0 0 14 9"
          aria-hidden="true"
          className="absolute top-[43px] left-1/2 -ml-[7px]"
        >
          <path d="M0 9L7 0L14 9Z" fill="var(--index)" />
        </svg>
      ) : null}
    </span>
  );
}
