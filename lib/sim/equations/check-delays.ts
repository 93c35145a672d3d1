import { EngineError } from '@/lib/contracts/common';
import type { CompiledSystem } from './types';

const PLACES = 257;

/**
 * Every delay must be ≥ 0 over the whole range of the control. `p` holds the other parameters' values;
 * the control's own entry is not read. Throws EngineError `invalid-request`.
 */
export function checkDelays(
  system: CompiledSystem,
  p: Float64Array,
  controlIndex: number,
  from: number,
  to: number,
): void {
  if (system.K === 0) return;
  const values = Float64Array.from(p);
  const delays = new Float64Array(system.K);
  for (let i = 0; i < PLACES; i += 1) {
    const control = from + ((to - from) * i) / (PLACES - 1);
    if (controlIndex >= 0) values[controlIndex] = control;
    system.delays(values, delays);
    for (const delay of delays) {
      if (delay >= 0 && Number.isFinite(delay)) continue;
      const where =
        controlIndex >= 0 ? ` where ${system.parameters[controlIndex]} = ${control}` : '';
      throw new EngineError(
        'invalid-request',
        `a delay is ${delay}${where}: delays must be 0 or more over the whole range; correct the range or the parameters`,
        controlIndex >= 0 ? 'control.from' : 'model.parameters',
      );
    }
  }
}
