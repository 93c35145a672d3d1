import { EngineError, type SystemModel } from '@/lib/contracts';
import { compileModel } from './equations/compile';
import type { CompiledSystem } from './equations/types';

/**
 * Compiles the `model` of a request; an error's path then starts at the request.
 *
 * @throws EngineError 'invalid-equation', 'limit-exceeded' with `at` such as `model.equations.x`
 */
export function compileRequestModel(model: SystemModel): CompiledSystem {
  try {
    return compileModel(model);
  } catch (error) {
    if (!(error instanceof EngineError) || error.at.startsWith('model')) throw error;
    throw new EngineError(error.code, error.message, error.at ? `model.${error.at}` : 'model');
  }
}
