'use client';

import { useEffect, useRef } from 'react';
import type { Problem } from '@/lib/contracts';
import { FormProblem } from './form-problem';

/** What an action answered instead of a value; focus goes there, so that it is not overlooked. */
export function ActionProblem({ problem }: { problem: Problem | null }) {
  const box = useRef<HTMLDivElement>(null);
  useEffect(() => {
    if (problem) box.current?.focus();
  }, [problem]);
  if (!problem) return null;
  return (
    <div ref={box} tabIndex={-1}>
      <FormProblem problems={{ what: problem.message, how: problem.mend }} />
    </div>
  );
}
