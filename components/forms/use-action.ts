'use client';

import { useCallback, useRef, useState } from 'react';
import type { ActionResult, Problem } from '@/lib/contracts';

/**
 * Calls a server action once at a time: a second press while it runs does nothing. A network that
 * fails is told as a problem, and what was typed stays.
 */
export function useAction<I, T>(
  action: (input: I) => Promise<ActionResult<T>>,
  options: { onDone?: (value: T) => void } = {},
) {
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<Problem | null>(null);
  const busy = useRef(false);
  const { onDone } = options;

  const run = useCallback(
    async (input: I) => {
      if (busy.current) return;
      busy.current = true;
      setPending(true);
      setProblem(null);
      try {
        const result = await action(input);
        if (result.ok) onDone?.(result.value);
        else setProblem(result.problem);
      } catch {
        setProblem({
          code: 'unavailable',
          message: 'The server did not answer. Nothing was saved.',
          mend: 'Check the network and press again.',
        });
      } finally {
        busy.current = false;
        setPending(false);
      }
    },
    [action, onDone],
  );
  return { run, pending, problem, clear: () => setProblem(null) };
}
