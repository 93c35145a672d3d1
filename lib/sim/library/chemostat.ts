import type { Spread } from '@/lib/contracts/model';
import type { LibraryModel } from './types';

const VESSEL_ML = 380;
const HOURS_PER_DAY = 24;
const lognormal = (cv: number): Spread => ({ kind: 'lognormal', cv });

/** Rotifers feeding on algae in a flow vessel: both edges of the oscillation, set by the pump. */
export const chemostat: LibraryModel = {
  id: 'chemostat-predator-prey',
  title: 'Predator and prey in a chemostat',
  summary:
    'Planktonic rotifers graze algae that grow on inflowing nitrogen. At slow flow and at fast flow the populations are steady; in between they cycle. Four quantities: nitrogen, algae, breeding rotifers, all rotifers.',
  source: {
    authors: 'Fussmann GF, Ellner SP, Shertzer KW, Hairston NG Jr',
    year: 2000,
    title: 'Crossing the Hopf bifurcation in a live predator–prey system',
    where: 'Science 290:1358–1360',
  },
  provenance:
    'Equations and parameter values as published. The spreads (growth rates well known, half saturation of the algae poorly) and the reading errors are choices of common practice, not from the paper.',
  perturbs: 'micro-organisms',
  model: {
    name: 'Predator and prey in a chemostat',
    timeUnit: 'd',
    variables: [
      { symbol: 'N', start: 1.6, unit: 'umol/L', label: 'nitrogen', nonnegative: true },
      { symbol: 'C', start: 4.3, unit: 'umol/L', label: 'algae, as nitrogen', nonnegative: true },
      {
        symbol: 'R',
        start: 0.38,
        unit: 'umol/L',
        label: 'breeding rotifers, as nitrogen',
        nonnegative: true,
      },
      {
        symbol: 'B',
        start: 1.8,
        unit: 'umol/L',
        label: 'all rotifers, as nitrogen',
        nonnegative: true,
      },
    ],
    parameters: [
      { symbol: 'Ni', value: 80, unit: 'umol/L', label: 'nitrogen in the inflow' },
      {
        symbol: 'bc',
        value: 3.3,
        unit: '/d',
        label: 'algal growth, largest rate',
        spread: lognormal(0.025),
      },
      {
        symbol: 'Kc',
        value: 4.3,
        unit: 'umol/L',
        label: 'algae, half saturation',
        spread: lognormal(0.4),
      },
      {
        symbol: 'bb',
        value: 2.25,
        unit: '/d',
        label: 'rotifer growth, largest rate',
        spread: lognormal(0.006),
      },
      {
        symbol: 'Kb',
        value: 15,
        unit: 'umol/L',
        label: 'rotifers, half saturation',
        spread: lognormal(0.02),
      },
      { symbol: 'm', value: 0.055, unit: '/d', label: 'rotifer mortality', spread: lognormal(0.1) },
      {
        symbol: 'lam',
        value: 0.4,
        unit: '/d',
        label: 'rotifers ceasing to breed',
        spread: lognormal(0.03),
      },
      {
        symbol: 'eps',
        value: 0.25,
        unit: '1',
        label: 'assimilated share of food',
        spread: lognormal(0.05),
      },
      { symbol: 'de', value: 0.5, unit: '/d', label: 'dilution rate' },
    ],
    equations: {
      N: 'de*(Ni - N) - bc*N/(Kc + N)*C',
      C: 'bc*N/(Kc + N)*C - bb*C/(Kb + C)*B/eps - de*C',
      R: 'bb*C/(Kb + C)*R - (de + m + lam)*R',
      B: 'bb*C/(Kb + C)*R - (de + m)*B',
    },
    readouts: [
      { symbol: 'algae', expression: 'C', unit: 'umol/L', noiseSd: 1 },
      { symbol: 'rotifers', expression: 'B', unit: 'umol/L', noiseSd: 0.3 },
    ],
  },
  control: {
    symbol: 'de',
    from: 0.02,
    to: 1.4,
    doseMap: { kind: 'linear', slope: HOURS_PER_DAY / VESSEL_ML, offset: 0 },
  },
  doseLabel: 'pump rate',
  doseUnit: 'mL/h',
};
