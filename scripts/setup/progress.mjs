/** Prints a line of progress. */
export function say(text) {
  console.log(`  ${text}`);
}

/**
 * Does one step, with a line before it and its duration after it.
 *
 * @param {string} text what is being done, as people would say it
 * @param {() => Promise<T>} work
 * @template T
 */
export async function step(text, work) {
  console.log(`· ${text} …`);
  const began = performance.now();
  const result = await work();
  const seconds = (performance.now() - began) / 1000;
  if (seconds >= 1) say(`done in ${seconds.toFixed(seconds < 10 ? 1 : 0)} s`);
  return result;
}
