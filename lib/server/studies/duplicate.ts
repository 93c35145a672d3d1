/** Whether a write failed because its key is already there, however deep the driver's error lies. */
export function isDuplicate(error: unknown): boolean {
  for (let e = error, depth = 0; e && depth < 5; depth += 1) {
    if ((e as { code?: string }).code === 'ER_DUP_ENTRY') return true;
    e = (e as { cause?: unknown }).cause;
  }
  return false;
}
