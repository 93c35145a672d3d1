'use client';

import { Key } from '@/components/ui';
import { useNow } from '@/components/ui/use-now';

const SLIP_MS = 10_000;

/** A stop holds: who pressed it, and for ten seconds the way back from a slip. */
export function HeldPanel(props: {
  stops: { id: string; mine: boolean; at: string; text: string }[];
  now: string;
  pending: boolean;
  onSlip: (stopId: string) => void;
}) {
  const now = useNow(props.now, 500);
  const newest = props.stops[0];
  const left = newest ? Math.ceil((Date.parse(newest.at) + SLIP_MS - now) / 1000) : 0;
  return (
    <div role="alert">
      <h2 className="text-instruction font-medium">Stopped. Set nothing.</h2>
      <ul className="mt-4 text-bench">
        {props.stops.map((s) => (
          <li key={s.id}>{s.text}</li>
        ))}
      </ul>
      <p className="mt-4 text-bench">
        The head and the investigators are told. Only the lab head lifts a stop. Make the
        preparation safe as your protocol says.
      </p>
      {newest?.mine && left > 0 ? (
        <div className="mt-6">
          <Key
            className="min-h-20! px-8 text-bench-key!"
            pending={props.pending}
            onClick={() => props.onSlip(newest.id)}
          >
            It was a slip ({left} s)
          </Key>
        </div>
      ) : null}
    </div>
  );
}
