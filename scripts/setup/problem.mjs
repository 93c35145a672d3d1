/** Something that whoever typed the command can mend: shown as its message alone, without a stack. */
export class Problem extends Error {
  name = 'Problem';
}

/** Ends the process with a readable account of what went wrong. */
export function reportFailure(error) {
  const text = error instanceof Problem ? error.message : (error?.stack ?? String(error));
  console.error(`\n${text}`);
}
