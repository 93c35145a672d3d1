import { describe, expect, it } from 'vitest';
import { upperF } from '@/lib/evidence/judge/amplitude';
import { secondOrderRhythm, yuleWalker } from '@/lib/evidence/judge/autoregression';
import { leastSquares } from '@/lib/evidence/judge/least-squares';
import { levenbergMarquardt } from '@/lib/evidence/judge/levenberg-marquardt';
import {
  baluevFalseAlarm,
  floatingMeanPower,
  leadingPeaks,
  periodogram,
} from '@/lib/evidence/judge/periodogram';
import { makeLikelihood, NO_DRIFT } from '@/lib/evidence/judge/state-space';
import { referenceColumns } from './reference-data';
import { random } from './simulated-records';

describe('floating-mean periodogram', () => {
  it('equals 1 − RSS/TSS of a least-squares sine with free mean, on uneven times', () => {
    const r = random(3);
    const t = Array.from({ length: 37 }, () => 20 * r.uniform()).sort((a, b) => a - b);
    const y = t.map((v) => 5 + Math.sin(v) + r.normal());
    for (const f of [0.05, 0.16, 0.41]) {
      const columns = [
        new Float64Array(37).fill(1),
        Float64Array.from(t, (v) => Math.cos(2 * Math.PI * f * v)),
        Float64Array.from(t, (v) => Math.sin(2 * Math.PI * f * v)),
      ];
      const mean = y.reduce((s, v) => s + v / 37, 0);
      const total = y.reduce((s, v) => s + (v - mean) ** 2, 0);
      expect(floatingMeanPower(t, y, f)).toBeCloseTo(1 - leastSquares(columns, y).rss / total, 10);
    }
  });

  it('finds 9.62 years at power 0.6389 in log10 lynx (SciPy and astropy)', () => {
    const { x, y } = referenceColumns('lynx.csv', 0, 1);
    const span = x[x.length - 1]! - x[0]!;
    const spectrum = periodogram(x, y.map(Math.log10), 1 / span, 0.5, 20_001);
    const peak = leadingPeaks(spectrum, 1)[0]!;
    expect(1 / peak.frequency).toBeCloseTo(9.62, 1);
    expect(peak.power).toBeCloseTo(0.6389, 3);
  });

  it('finds 11.04 years in yearly sunspots 1700–1988 (SciPy and astropy)', () => {
    const { x, y } = referenceColumns('sunspot-year.csv', 0, 1);
    const spectrum = periodogram(x, y, 1 / 288, 0.5, 40_001);
    expect(Math.abs(1 / leadingPeaks(spectrum, 1)[0]!.frequency - 11.04)).toBeLessThan(0.02);
  });

  it('gives Baluev false alarms 0.0281 and 0.00333 for power 0.5 and 0.6 (astropy)', () => {
    const t = Array.from({ length: 24 }, (_, i) => 2 * i);
    expect(baluevFalseAlarm(0.5, t, 0.25)).toBeCloseTo(0.0281, 4);
    expect(baluevFalseAlarm(0.6, t, 0.25)).toBeCloseTo(0.00333, 5);
  });

  it('gives luteinizing hormone a Baluev false alarm of 0.121 (astropy)', () => {
    const { x, y } = referenceColumns('lh.csv', 1, 2);
    const spectrum = periodogram(x, y, 1 / 470, 0.05, 20_001);
    expect(baluevFalseAlarm(leadingPeaks(spectrum, 1)[0]!.power, x, 0.05)).toBeCloseTo(0.121, 2);
  });
});

describe('autoregression', () => {
  it('agrees with R ar(order 2) on log10 lynx: coefficients, pole and peak periods, decay', () => {
    const fit = yuleWalker(referenceColumns('lynx.csv', 0, 1).y.map(Math.log10), 2)!;
    expect(fit.coefficients[0]).toBeCloseTo(1.3504, 4);
    expect(fit.coefficients[1]).toBeCloseTo(-0.72, 4);
    const rhythm = secondOrderRhythm(fit.coefficients[0]!, fit.coefficients[1]!)!;
    expect(rhythm.modulus).toBeCloseTo(0.8485, 4);
    expect(rhythm.polePeriod).toBeCloseTo(9.658, 3);
    expect(rhythm.peakPeriod).toBeCloseTo(9.932, 3);
    expect(rhythm.decayTime).toBeCloseTo(6.09, 2);
  });

  it('agrees with R ar() on sunspot.year (order 2) and lh (order 3)', () => {
    const sun = yuleWalker(referenceColumns('sunspot-year.csv', 0, 1).y, 2)!;
    const rhythm = secondOrderRhythm(sun.coefficients[0]!, sun.coefficients[1]!)!;
    expect(rhythm.polePeriod).toBeCloseTo(10.764, 2);
    expect(rhythm.peakPeriod).toBeCloseTo(11.532, 2);
    const lh = yuleWalker(referenceColumns('lh.csv', 1, 2).y, 3)!;
    [0.6534, -0.0636, -0.2269].forEach((phi, i) => {
      expect(lh.coefficients[i]).toBeCloseTo(phi, 4);
    });
    expect(lh.variance).toBeCloseTo(0.1959, 4);
  });
});

describe('Levenberg–Marquardt', () => {
  it('reaches the certified NIST ENSO solution from the published start', () => {
    const { x, y } = referenceColumns('enso.csv', 0, 1);
    const w = 2 * Math.PI;
    const residuals = (b: number[]) =>
      Float64Array.from(x, (t, i) => {
        const fit =
          b[0]! +
          b[1]! * Math.cos((w * t) / 12) +
          b[2]! * Math.sin((w * t) / 12) +
          b[4]! * Math.cos((w * t) / b[3]!) +
          b[5]! * Math.sin((w * t) / b[3]!) +
          b[7]! * Math.cos((w * t) / b[6]!) +
          b[8]! * Math.sin((w * t) / b[6]!);
        return fit - y[i]!;
      });
    const fit = levenbergMarquardt(residuals, [11, 3, 0.5, 40, -0.7, -1.3, 25, -0.3, 1.4]);
    const certified = [
      10.510749193, 3.0762128085, 0.53280138227, 44.3110887, -1.6231428586, 0.52554493756,
      26.88761444, 0.21232288488, 1.4966870418,
    ];
    expect(fit.outcome).toBe('converged');
    expect(fit.rss).toBeCloseTo(788.53978668, 6);
    certified.forEach((b, i) => {
      expect(Math.abs(fit.parameters[i]! / b - 1)).toBeLessThan(1e-5);
    });
  });

  it('says failed, and gives no NaN, when the start lies outside the domain', () => {
    expect(levenbergMarquardt(() => null, [1]).outcome).toBe('failed');
  });
});

describe('state-space likelihood', () => {
  it('without drive equals least squares on trend and damped sines', () => {
    const r = random(5);
    const t = Float64Array.from({ length: 30 }, (_, i) =>
      i === 0 ? 0 : (i + 0.4 * r.uniform()) / 30,
    );
    const y = t.map(() => r.normal());
    const trend = [new Float64Array(30).fill(1)];
    const [growth, frequency] = [-1.3, 4.2];
    const columns = [
      ...trend,
      t.map((v) => Math.exp(growth * v) * Math.cos(2 * Math.PI * frequency * v)),
      t.map((v) => Math.exp(growth * v) * Math.sin(2 * Math.PI * frequency * v)),
    ];
    const { rss } = leastSquares(columns, y);
    const answer = makeLikelihood(t, y, trend, 1e-6)({ growth, frequency, drive: 0, ...NO_DRIFT })!;
    expect(answer.noiseVariance).toBeCloseTo(rss / 30, 10);
    expect(answer.logLikelihood).toBeCloseTo(-15 * Math.log(rss / 30), 8);
  });
});

describe('F distribution', () => {
  it('matches tabulated 1 % and 5 % points (common tables)', () => {
    expect(upperF(4.85, 10, 10)).toBeCloseTo(0.01, 3);
    expect(upperF(3.33, 5, 10)).toBeCloseTo(0.05, 3);
    expect(upperF(2.98, 10, 10)).toBeCloseTo(0.05, 3);
  });
});
