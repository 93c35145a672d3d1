import type { Spread, SystemModel } from '@/lib/contracts/model';
import type { LibraryModel } from './types';

const MRNA_LIFETIME_MIN = 2 / Math.LN2;
const PROTEIN_TO_MRNA = 2 / 10;
const spread: Spread = { kind: 'lognormal', cv: 0.05 };

const variables: SystemModel['variables'] = [1, 2, 3].flatMap((i) => [
  { symbol: `m${i}`, start: 2 + i, unit: '1', label: `messenger ${i}`, nonnegative: true },
  { symbol: `p${i}`, start: 1 + i, unit: '1', label: `repressor ${i}`, nonnegative: true },
]);
const equations = Object.fromEntries(
  [1, 2, 3].flatMap((i) => [
    [`m${i}`, `(alpha/(1 + p${i === 1 ? 3 : i - 1}^n) - m${i})/life`],
    [`p${i}`, `beta*(m${i} - p${i})/life`],
  ]),
);

/** Three genes that repress each other in a ring; an inhibitor of transcription stills them. */
export const repressorLoop: LibraryModel = {
  id: 'repressor-loop',
  title: 'Ring of three repressors',
  summary:
    'Each of three genes makes the repressor of the next. With strong promoters the ring cycles; an inhibitor of transcription weakens all three alike, so that more dose is less promoter strength and the rhythm ends at high dose. Six quantities.',
  source: {
    authors: 'Elowitz MB, Leibler S',
    year: 2000,
    title: 'A synthetic oscillatory network of transcriptional regulators',
    where: 'Nature 403:335–338',
  },
  provenance:
    'Equations, Hill steepness 2, promoter strength 216, and half-lives of 2 min (messenger) and 10 min (protein) as in the source, quoted from memory, without leakage. The dose map, the spreads and the reading error are illustrations and common practice: measure the dose map of your own strain.',
  perturbs: 'micro-organisms',
  model: {
    name: 'Ring of three repressors',
    timeUnit: 'min',
    variables,
    parameters: [
      { symbol: 'alpha', value: 216, unit: '1', label: 'promoter strength' },
      { symbol: 'n', value: 2, unit: '1', label: 'Hill steepness of repression' },
      {
        symbol: 'beta',
        value: PROTEIN_TO_MRNA,
        unit: '1',
        label: 'messenger half-life over protein half-life',
        spread,
      },
      {
        symbol: 'life',
        value: MRNA_LIFETIME_MIN,
        unit: 'min',
        label: 'messenger lifetime',
        spread,
      },
    ],
    equations,
    readouts: [
      { symbol: 'reporter', expression: 'p1', unit: '1', noiseSd: 0.2 },
      { symbol: 'second', expression: 'p2', unit: '1', noiseSd: 0.2 },
    ],
  },
  control: {
    symbol: 'alpha',
    from: 2,
    to: 216,
    doseMap: {
      kind: 'hill-inhibition',
      base: 216,
      ec50: { value: 10, spread: { kind: 'lognormal', cv: 0.05 } },
      hill: 2,
    },
  },
  doseLabel: 'transcription inhibitor',
  doseUnit: 'umol/L',
};
