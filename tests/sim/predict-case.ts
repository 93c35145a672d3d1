import { predictRequest } from '@/lib/contracts';
import { predict } from '@/lib/sim/predict';

type Variables = Record<string, number | { start: number; nonnegative: boolean }>;

/** Predicts a small system written out in a test. */
export function ask(
  equations: Record<string, string>,
  variables: Variables,
  parameters: Record<string, number>,
  control: { symbol: string; from: number; to: number },
) {
  return predict(
    predictRequest.parse({
      model: {
        name: 'case',
        timeUnit: 's',
        variables: Object.entries(variables).map(([symbol, v]) =>
          typeof v === 'number' ? { symbol, start: v } : { symbol, ...v },
        ),
        parameters: Object.entries(parameters).map(([symbol, value]) => ({ symbol, value })),
        equations,
      },
      control,
      draws: 0,
      cycles: false,
    }),
  );
}

export const codes = (answer: ReturnType<typeof ask>) => answer.notes.map((n) => n.code);
