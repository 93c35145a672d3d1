import clsx from 'clsx';

const HEIGHT = { card: 56, page: 120 } as const;
const RULE_AT = { card: 40, page: 100 } as const;
const LINE_AT = { card: 15, page: 45 } as const;

type LoadingProps = {
  size?: 'card' | 'page';
  /** what is counted: "draws" */
  what?: string;
  done?: number;
  total?: number;
};

/**
 * A ribbon at its final size while its figures are worked out: rule, ticks, flat line; after 400 ms
 * words and an index fill along the rule.
 */
export function LoadingRibbon({ size = 'page', what, done, total }: LoadingProps) {
  const known = done !== undefined && total !== undefined && total > 0;
  const share = known ? Math.min(1, Math.max(0, done / total)) : 0;
  const words = known ? `${done} of ${total} ${what ?? ''}`.trim() : (what ?? 'working');
  const rule = RULE_AT[size];
  const pad = size === 'page' ? 'inset-x-4' : 'inset-x-1.5';
  return (
    <div
      className="relative w-full"
      style={{ height: HEIGHT[size] }}
      role="progressbar"
      aria-label={words}
      aria-valuemin={0}
      aria-valuemax={known ? total : undefined}
      aria-valuenow={known ? done : undefined}
    >
      <span className={clsx('absolute h-0.5 bg-edge', pad)} style={{ top: LINE_AT[size] - 1 }} />
      <span className={clsx('absolute h-px bg-ink', pad)} style={{ top: rule }} />
      <span
        className={clsx('ticks absolute h-1.5', pad)}
        style={{ top: rule }}
        aria-hidden="true"
      />
      <span className={clsx('after-a-while absolute', pad)} style={{ top: rule - 1 }}>
        <span className="slide block h-[3px] bg-index" style={{ width: `${share * 100}%` }} />
        <span className="mt-1 block font-mono text-label text-ink2">{words}</span>
      </span>
    </div>
  );
}
