/** What an approval covers, on the dose axis; null: no such limit. */
export type Envelope = {
  doseLow: number;
  doseHigh: number;
  ceiling: number | null;
  largestStep: number | null;
};

export type Breach = { where: string; text: string };
export type EnvelopeVerdict = { ok: true } | { ok: false; breaches: Breach[] };

const shown = (x: number) => String(Number(x.toPrecision(6)));

function doseBreaches(dose: number, envelope: Envelope): string[] {
  if (!Number.isFinite(dose)) return ['The dose is not a number.'];
  const found: string[] = [];
  if (dose < envelope.doseLow) {
    found.push(`${shown(dose)} lies below the lowest approved dose, ${shown(envelope.doseLow)}.`);
  }
  if (dose > envelope.doseHigh) {
    found.push(`${shown(dose)} lies above the highest approved dose, ${shown(envelope.doseHigh)}.`);
  }
  if (envelope.ceiling !== null && dose > envelope.ceiling) {
    found.push(`${shown(dose)} lies above the ceiling, ${shown(envelope.ceiling)}.`);
  }
  return found;
}

/**
 * Whether levels, in order of work, stay within an approved envelope; each breach says where and
 * by what. Rising steps count from `start`, the dose in force before, where it is given. `stepped`:
 * one preparation takes the levels one after another; fresh preparations know no steps between.
 */
export function withinEnvelope(
  levels: readonly { dose: number }[],
  envelope: Envelope,
  start?: number,
  stepped = true,
): EnvelopeVerdict {
  const breaches: Breach[] = [];
  let at = start;
  levels.forEach(({ dose }, i) => {
    const where = `level ${i + 1}`;
    for (const text of doseBreaches(dose, envelope)) breaches.push({ where, text });
    const largest = envelope.largestStep;
    const rounding = 1e-12 * Math.max(Math.abs(dose), Math.abs(at ?? 0), largest ?? 0);
    if (stepped && largest !== null && at !== undefined && dose - at > largest + rounding) {
      const text = `The rise from ${shown(at)} to ${shown(dose)} exceeds the largest approved step, ${shown(largest)}.`;
      breaches.push({ where, text });
    }
    at = dose;
  });
  return breaches.length === 0 ? { ok: true } : { ok: false, breaches };
}
