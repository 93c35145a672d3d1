'use client';

import { useEffect, useState } from 'react';
import { useNow } from '@/components/ui/use-now';
import { clockText, offsetText, placeOf } from '@/lib/format';
import { dayScale } from './day-scale';

const HALF_MINUTE = 30_000;

type Props = { now: string; zone: string };

/** Index pointer at now, on the scale of the day that the page was made on. */
export function DayPointer({ now, zone }: Props) {
  const instant = useNow(now, HALF_MINUTE);
  const share = dayScale(now, zone).share(instant);
  return (
    <span
      className="slide absolute top-0 text-index"
      style={{ left: `${Math.min(Math.max(share, 0), 1) * 100}%` }}
    >
      <svg
        width={12}
        height={31}
        viewBox="0 0 12 31"
        className="absolute -left-1.5 block max-w-none"
        aria-hidden="true"
      >
        <path d="M0 0H12L6 8Z" fill="currentColor" />
        <path d="M6 0V31" stroke="currentColor" strokeWidth={1.5} />
      </svg>
    </span>
  );
}

/** Clock, place and offset; without a network, words say so. */
export function DayClock({ now, zone }: Props) {
  const instant = useNow(now, HALF_MINUTE);
  const [offline, setOffline] = useState(false);
  useEffect(() => {
    const update = () => setOffline(!navigator.onLine);
    update();
    window.addEventListener('online', update);
    window.addEventListener('offline', update);
    return () => {
      window.removeEventListener('online', update);
      window.removeEventListener('offline', update);
    };
  }, []);
  return (
    <p className="flex shrink-0 items-center gap-[9px] font-mono text-[14px] whitespace-nowrap">
      <span className="font-bold text-index">{clockText(instant, zone)}</span>
      <span className="hidden tablet:inline">
        {offline ? 'no network' : `${placeOf(zone)}, ${offsetText(instant, zone)}`}
      </span>
      {offline ? <span className="tablet:hidden">no network</span> : null}
    </p>
  );
}
