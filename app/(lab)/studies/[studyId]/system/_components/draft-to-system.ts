import { type Control, control, type SystemModel, systemModel } from '@/lib/contracts';
import type { FieldProblem } from '@/lib/contracts/forms/system';
import {
  type DoseMapDraft,
  MAP_KEYS,
  type MapNumberDraft,
  type SpreadDraft,
  type SystemDraft,
} from './draft';

export type ReadSystem =
  | { ok: true; model: SystemModel; control: Control }
  | { ok: false; problems: FieldProblem[] };

/** Reads typed numbers, keeping a problem for each field that holds none. */
class Reader {
  readonly problems: FieldProblem[] = [];

  number(text: string, at: string, what: string): number {
    const trimmed = text.trim().replace('\u2212', '-');
    const value = trimmed === '' ? Number.NaN : Number(trimmed);
    if (Number.isFinite(value)) return value;
    const message =
      trimmed === ''
        ? `Give ${what}`
        : trimmed.includes(',')
          ? `“${trimmed}” is no number here: write the decimal mark as a point`
          : `“${trimmed}” is no number`;
    this.problems.push({ at, message });
    return 0;
  }

  spread(draft: SpreadDraft, at: string) {
    switch (draft.kind) {
      case 'none':
        return undefined;
      case 'normal':
        return { kind: 'normal' as const, sd: this.number(draft.a, `${at}.sd`, 'the sd') };
      case 'lognormal':
        return { kind: 'lognormal' as const, cv: this.number(draft.a, `${at}.cv`, 'the cv') };
      case 'uniform':
        return {
          kind: 'uniform' as const,
          low: this.number(draft.a, `${at}.low`, 'the lowest value'),
          high: this.number(draft.b, `${at}.high`, 'the highest value'),
        };
    }
  }

  mapNumber(draft: MapNumberDraft, at: string, what: string) {
    const value = this.number(draft.value, at, what);
    const spread = this.spread(draft.spread, `${at}.spread`);
    return spread ? { value, spread } : value;
  }
}

const optional = (text: string) => text.trim() || undefined;

function doseMapOf(read: Reader, { kind, numbers, rows }: DoseMapDraft) {
  const at = 'control.doseMap';
  if (kind === 'identity') return undefined;
  if (kind === 'table') {
    return {
      kind,
      dose: rows.map((r, i) => read.number(r.dose, `${at}.dose.${i}`, 'a dose')),
      value: rows.map((r, i) => read.mapNumber(r.value, `${at}.value.${i}`, 'a control value')),
    };
  }
  const entries = MAP_KEYS[kind].map((key) => [
    key,
    read.mapNumber(numbers[key], `${at}.${key}`, `the number ${key}`),
  ]);
  return { kind, ...Object.fromEntries(entries) };
}

/** The system that a draft stands for, or every field that must be mended first. */
export function systemOf(draft: SystemDraft): ReadSystem {
  const read = new Reader();
  const model = {
    name: draft.name.trim(),
    timeUnit: draft.timeUnit.trim(),
    variables: draft.variables.map((v, i) => ({
      symbol: v.symbol.trim(),
      start: read.number(v.start, `model.variables.${i}.start`, 'a start value'),
      unit: optional(v.unit),
      label: optional(v.label),
      nonnegative: v.nonnegative || undefined,
    })),
    parameters: draft.parameters.map((p, i) => ({
      symbol: p.symbol.trim(),
      value: read.number(p.value, `model.parameters.${i}.value`, 'a value'),
      unit: optional(p.unit),
      label: optional(p.label),
      spread: read.spread(p.spread, `model.parameters.${i}.spread`),
    })),
    equations: Object.fromEntries(draft.variables.map((v) => [v.symbol.trim(), v.equation.trim()])),
    readouts:
      draft.readouts.length === 0
        ? undefined
        : draft.readouts.map((r, i) => ({
            symbol: r.symbol.trim(),
            expression: r.expression.trim(),
            unit: optional(r.unit),
            noiseSd: r.noiseSd.trim()
              ? read.number(r.noiseSd, `model.readouts.${i}.noiseSd`, 'the noise')
              : undefined,
          })),
  };
  const wanted = {
    symbol: draft.control.symbol,
    from: read.number(draft.control.from, 'control.from', 'the lowest control value'),
    to: read.number(draft.control.to, 'control.to', 'the highest control value'),
    doseMap: doseMapOf(read, draft.doseMap),
  };
  const parsedModel = systemModel.safeParse(model);
  const parsedControl = control.safeParse(wanted);
  const problems = [
    ...read.problems,
    ...(parsedModel.error ? issues(parsedModel.error.issues, 'model') : []),
    ...(parsedControl.error ? issues(parsedControl.error.issues, 'control') : []),
  ];
  if (problems.length > 0 || !parsedModel.success || !parsedControl.success) {
    return { ok: false, problems: oneEach(problems) };
  }
  return { ok: true, model: parsedModel.data, control: parsedControl.data };
}

type Issue = { path: PropertyKey[]; message: string; code?: string; origin?: string };

const TOO_SMALL: Record<string, string> = {
  string: 'Fill this in',
  number: 'This must be 0 or more',
  array: 'At least one is needed',
};

const issues = (list: Issue[], root: string): FieldProblem[] =>
  list.map(({ path, message, code, origin }) => ({
    at: [root, ...path.map(String)].join('.'),
    message: (code === 'too_small' && TOO_SMALL[origin ?? '']) || sentence(message),
  }));

const sentence = (text: string) => `${text[0]?.toUpperCase() ?? ''}${text.slice(1)}`;

/** The first problem of each field. */
function oneEach(problems: FieldProblem[]): FieldProblem[] {
  const byField = new Map<string, FieldProblem>();
  for (const problem of problems) if (!byField.has(problem.at)) byField.set(problem.at, problem);
  return [...byField.values()];
}
