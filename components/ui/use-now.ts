'use client';

import { useEffect, useState } from 'react';

/**
 * The instant now in ms, refreshed each `everyMs`. It starts from the server's clock and advances by
 * elapsed time, so that a tablet with a wrong clock still keeps the lab's time.
 */
export function useNow(start: string, everyMs: number): number {
  const [now, setNow] = useState(() => Date.parse(start));
  useEffect(() => {
    const base = Date.parse(start);
    const from = performance.now();
    setNow(base);
    const timer = setInterval(() => setNow(base + performance.now() - from), everyMs);
    return () => clearInterval(timer);
  }, [start, everyMs]);
  return now;
}
