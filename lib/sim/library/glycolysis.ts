import type { Spread } from '@/lib/contracts/model';
import type { LibraryModel } from './types';

const spread: Spread = { kind: 'lognormal', cv: 0.03 };
const STOCK_MMOL_L = 60;
const VESSEL_ML = 10;
const MINUTES_PER_HOUR = 60;

/** Sugar fed to an extract whose enzyme is switched on by its own product. */
export const glycolysis: LibraryModel = {
  id: 'glycolysis-feed',
  title: 'Glycolysis in a fed extract',
  summary:
    'Substrate is fed at a steady rate to an extract; the enzyme that uses it is activated by its own product. Slow and fast feeding give steady levels, feeding in between gives cycles of a few minutes. Two quantities.',
  source: {
    authors: "Sel'kov EE",
    year: 1968,
    title: 'Self-oscillations in glycolysis. 1. A simple kinetic model',
    where: 'European Journal of Biochemistry 4:79–86',
  },
  provenance:
    'The reduced form of the model as given in textbooks (Strogatz 1994, section 7.3), scaled here to minutes and mmol/L. Scales, feed, spreads and reading errors are illustrations and common practice.',
  perturbs: 'chemical reaction',
  model: {
    name: 'Glycolysis in a fed extract',
    timeUnit: 'min',
    variables: [
      { symbol: 'P', start: 0.1, unit: 'mmol/L', label: 'product (ADP)', nonnegative: true },
      { symbol: 'F', start: 0.2, unit: 'mmol/L', label: 'substrate (F6P)', nonnegative: true },
    ],
    parameters: [
      { symbol: 'k', value: 3, unit: '/min', label: 'turnover of the product', spread },
      { symbol: 'a', value: 0.08, unit: '1', label: 'activity without activation', spread },
      { symbol: 'S', value: 0.2, unit: 'mmol/L', label: 'scale of activation', spread },
      { symbol: 'v', value: 0.4, unit: 'mmol/L/min', label: 'feed' },
    ],
    equations: {
      P: 'k*(a*F + (P/S)^2*F - P)',
      F: 'v - k*(a*F + (P/S)^2*F)',
    },
    readouts: [
      { symbol: 'product', expression: 'P', unit: 'mmol/L', noiseSd: 0.005 },
      { symbol: 'substrate', expression: 'F', unit: 'mmol/L', noiseSd: 0.01 },
    ],
  },
  control: {
    symbol: 'v',
    from: 0.05,
    to: 0.8,
    doseMap: {
      kind: 'linear',
      slope: STOCK_MMOL_L / (VESSEL_ML * MINUTES_PER_HOUR),
      offset: 0,
    },
  },
  doseLabel: 'feed pump rate',
  doseUnit: 'mL/h',
};
