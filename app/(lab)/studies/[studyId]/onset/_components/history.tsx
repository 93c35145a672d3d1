import { Plate } from '@/components/ui';
import type { Interval } from '@/lib/contracts';
import { intervalText } from '@/lib/format';

export type Past = { id: string; runs: number; at: string; onsets: Interval[] };

/** The observed interval after each estimate, on the ribbon's own scale, the newest first. */
export function History(props: { past: Past[]; from: number; to: number; unit: string }) {
  const { past, from, to, unit } = props;
  if (past.length < 2) return null;
  const share = (value: number) => Math.min(1, Math.max(0, (value - from) / (to - from)));
  const percent = (x: number) => `${(100 * x).toFixed(2)}%`;
  return (
    <Plate title="How the interval narrowed" className="mt-6">
      <ol className="flex flex-col">
        {past.map((p) => (
          <li
            key={p.id}
            className="grid gap-x-4 border-b border-rule py-2 last:border-b-0 tablet:grid-cols-[14rem_1fr] desk:grid-cols-[14rem_1fr_20rem]"
          >
            <span>
              {p.runs} {p.runs === 1 ? 'run' : 'runs'} judged
              <span className="block text-caption text-ink2">{p.at}</span>
            </span>
            <span className="relative my-2 block h-3 min-w-0" aria-hidden="true">
              <span className="absolute inset-x-0 top-1.5 h-px bg-rule" />
              {p.onsets.map((o) => (
                <span key={`${o.low} ${o.high}`}>
                  <span
                    className="absolute top-[5px] h-[3px] min-w-[3px] bg-ink"
                    style={{
                      left: percent(share(o.low)),
                      width: percent(share(o.high) - share(o.low)),
                    }}
                  />
                  <span
                    className="absolute top-0 h-3 w-px bg-ink"
                    style={{ left: percent(share(o.value)) }}
                  />
                </span>
              ))}
            </span>
            <span className="font-mono">
              {p.onsets.length > 0
                ? p.onsets.map((o) => intervalText(o, { unit })).join(' and ')
                : 'a bound only'}
            </span>
          </li>
        ))}
      </ol>
    </Plate>
  );
}
