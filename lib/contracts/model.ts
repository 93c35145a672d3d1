import { z } from 'zod';
import { finite, nonNegative, symbolName } from './common';

/** Limits that keep one model within what the engine can work in reasonable time. */
export const MODEL_LIMITS = { variables: 200, parameters: 500, equationLength: 20_000 } as const;

export const spread = z
  .discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('normal'), sd: nonNegative }),
    z.strictObject({ kind: z.literal('lognormal'), cv: nonNegative }),
    z.strictObject({ kind: z.literal('uniform'), low: finite, high: finite }),
  ])
  .refine((s) => s.kind !== 'uniform' || s.low <= s.high, {
    message: 'low must not exceed high',
    path: ['low'],
  });
export type Spread = z.infer<typeof spread>;

const unit = z.string().max(40);
const label = z.string().max(200);
const expression = z.string().min(1).max(MODEL_LIMITS.equationLength);

export const variable = z.strictObject({
  symbol: symbolName,
  start: finite,
  unit: unit.optional(),
  label: label.optional(),
  nonnegative: z.boolean().optional(),
});
export const parameter = z.strictObject({
  symbol: symbolName,
  value: finite,
  unit: unit.optional(),
  label: label.optional(),
  spread: spread.optional(),
});
export const readout = z.strictObject({
  symbol: symbolName,
  expression,
  unit: unit.optional(),
  noiseSd: nonNegative.optional(),
});

export const systemModel = z
  .strictObject({
    name: z.string().min(1).max(200),
    timeUnit: z.string().min(1).max(20),
    variables: z.array(variable).min(1).max(MODEL_LIMITS.variables),
    parameters: z.array(parameter).max(MODEL_LIMITS.parameters),
    equations: z.record(z.string(), expression),
    readouts: z.array(readout).optional(),
  })
  .superRefine((model, ctx) => {
    const seen = new Set<string>();
    const claim = (symbol: string, path: (string | number)[]) => {
      if (seen.has(symbol)) {
        ctx.addIssue({ code: 'custom', message: `the symbol ${symbol} is declared twice`, path });
      }
      seen.add(symbol);
    };
    model.variables.forEach((v, i) => {
      claim(v.symbol, ['variables', i, 'symbol']);
      if (!(v.symbol in model.equations)) {
        ctx.addIssue({
          code: 'custom',
          message: `${v.symbol} has no equation`,
          path: ['equations', v.symbol],
        });
      }
    });
    model.parameters.forEach((p, i) => {
      claim(p.symbol, ['parameters', i, 'symbol']);
    });
    const variables = new Set(model.variables.map((v) => v.symbol));
    for (const key of Object.keys(model.equations)) {
      if (!variables.has(key)) {
        ctx.addIssue({
          code: 'custom',
          message: `there is an equation for ${key}, which is not a variable`,
          path: ['equations', key],
        });
      }
    }
  });
export type SystemModel = z.infer<typeof systemModel>;

/** A number of a dose map: exact, or with its calibration's spread. */
export const mapNumber = z.union([finite, z.strictObject({ value: finite, spread })]);
export type MapNumber = z.infer<typeof mapNumber>;

export const doseMap = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('identity') }),
  z.strictObject({ kind: z.literal('linear'), slope: mapNumber, offset: mapNumber }),
  z.strictObject({
    kind: z.literal('hill-inhibition'),
    base: mapNumber,
    ec50: mapNumber,
    hill: mapNumber,
    floor: mapNumber.optional(),
  }),
  z.strictObject({
    kind: z.literal('hill-activation'),
    base: mapNumber,
    top: mapNumber,
    ec50: mapNumber,
    hill: mapNumber,
  }),
  z.strictObject({
    kind: z.literal('table'),
    dose: z.array(finite).min(2),
    value: z.array(mapNumber).min(2),
  }),
]);
export type DoseMap = z.infer<typeof doseMap>;

export const control = z
  .strictObject({ symbol: symbolName, from: finite, to: finite, doseMap: doseMap.optional() })
  .refine((c) => c.from < c.to, { message: 'from must lie below to', path: ['from'] });
export type Control = z.infer<typeof control>;
