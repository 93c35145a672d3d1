const MOST_TRIES = 4;

/** Whether the database undid a transaction in favour of another that stood in its way. */
export function isDeadlock(error: unknown): boolean {
  for (let e = error, depth = 0; e && depth < 5; depth += 1) {
    if ((e as { code?: string }).code === 'ER_LOCK_DEADLOCK') return true;
    e = (e as { cause?: unknown }).cause;
  }
  return false;
}

/**
 * Does `work` again when the database chose it as the victim of a deadlock: it was undone whole, so that
 * nothing is done twice. A press of stop must not fail because a file was being taken in.
 */
export async function retryDeadlock<T>(work: () => Promise<T>): Promise<T> {
  for (let tries = 1; ; tries += 1) {
    try {
      return await work();
    } catch (error) {
      if (tries >= MOST_TRIES || !isDeadlock(error)) throw error;
      await new Promise((resolve) => setTimeout(resolve, 20 * tries));
    }
  }
}
