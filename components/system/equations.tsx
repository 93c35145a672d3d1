import type { SystemModel } from '@/lib/contracts';

/** Equations as they are worked with, one a line; long ones are wrapped. */
export function Equations({ model }: { model: Pick<SystemModel, 'variables' | 'equations'> }) {
  return (
    <pre className="font-mono text-body whitespace-pre-wrap [overflow-wrap:anywhere]">
      {model.variables
        .map((v) => `d${v.symbol}/dt = ${model.equations[v.symbol] ?? ''}`)
        .join('\n')}
    </pre>
  );
}
