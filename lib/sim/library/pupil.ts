import type { LibraryModel } from './types';

/** The pupil under delayed feedback: a delay added in the light path makes its area cycle. */
export const pupil: LibraryModel = {
  id: 'pupil-delayed-feedback',
  title: 'Pupil area under delayed light feedback',
  summary:
    'The area of the pupil answers the light that it let in a third of a second ago. An electronic light path can add to that delay; beyond some added delay the area cycles. One quantity with a delay.',
  source: {
    authors: 'Longtin A, Milton JG',
    year: 1989,
    title:
      'Modelling autonomous oscillations in the human pupil light reflex using non-linear delay-differential equations',
    where: 'Bulletin of Mathematical Biology 51:605–624',
  },
  provenance:
    'The form of the equation is the negative feedback of the source; the parameter values are of the size used there, quoted from memory, the steepness is chosen here. The spreads and the reading error are common practice. Measure your own before you rely on the onset.',
  perturbs: 'human volunteer',
  model: {
    name: 'Pupil area under delayed light feedback',
    timeUnit: 's',
    variables: [{ symbol: 'A', start: 30, unit: 'mm2', label: 'pupil area', nonnegative: true }],
    parameters: [
      {
        symbol: 'c',
        value: 200,
        unit: 'mm2/s',
        label: 'largest opening drive',
        spread: { kind: 'lognormal', cv: 0.05 },
      },
      {
        symbol: 'th',
        value: 50,
        unit: 'mm2',
        label: 'area of half drive',
        spread: { kind: 'lognormal', cv: 0.05 },
      },
      {
        symbol: 'n',
        value: 6,
        unit: '1',
        label: 'steepness of the feedback',
        spread: { kind: 'lognormal', cv: 0.05 },
      },
      {
        symbol: 'alpha',
        value: 3.21,
        unit: '/s',
        label: 'rate of the iris',
        spread: { kind: 'lognormal', cv: 0.05 },
      },
      { symbol: 'tau', value: 0.3, unit: 's', label: 'delay of the whole loop' },
    ],
    equations: { A: 'c*th^n/(th^n + A(t - tau)^n) - alpha*A' },
    readouts: [{ symbol: 'area', expression: 'A', unit: 'mm2', noiseSd: 0.5 }],
  },
  control: {
    symbol: 'tau',
    from: 0.3,
    to: 1.2,
    doseMap: {
      kind: 'linear',
      slope: 0.001,
      offset: { value: 0.3, spread: { kind: 'normal', sd: 0.01 } },
    },
  },
  doseLabel: 'added delay',
  doseUnit: 'ms',
};
