import type { z } from 'zod';
import type { Problem } from '@/lib/contracts';

/** What a study says about itself, as typed. */
export type StudyDraft = {
  title: string;
  summary: string;
  perturbs: string;
  rigId: string;
  doseLabel: string;
  doseUnit: string;
  ceilingDose: string;
  largestStep: string;
  stopRules: string;
  approvalReference: string;
  approvalExpires: string;
};

const number = (text: string) => (text.trim() === '' ? undefined : Number(text));

/** The draft in the shape that the server's input asks for; it is parsed there and here by one schema. */
export function fieldsOf(draft: StudyDraft) {
  return {
    ...draft,
    rigId: draft.rigId || null,
    ceilingDose: number(draft.ceilingDose),
    largestStep: number(draft.largestStep),
    approvalReference: draft.approvalReference.trim() || null,
    approvalExpires: draft.approvalExpires || null,
  };
}

/** The first problem of each field, by its name. */
export function problemsByField(error: z.ZodError): Record<string, string> {
  const problems: Record<string, string> = {};
  for (const issue of error.issues) {
    const field = String(issue.path[0] ?? '');
    problems[field] ??= issue.message;
  }
  return problems;
}

/** A refusal by the server, at its field if it names one. */
export const refusalByField = (problem: Problem | null): Record<string, string> =>
  problem?.at ? { [problem.at]: [problem.message, problem.mend].filter(Boolean).join(' ') } : {};

const MOST_FRAMES = 60;

/** Moves the focus to the first field that has a problem, once one is drawn, in the order of the page. */
export function focusFirstProblem(form: HTMLFormElement | null, frames = MOST_FRAMES) {
  requestAnimationFrame(() => {
    const first = form?.querySelector<HTMLElement>('[aria-invalid="true"]');
    if (first) first.focus();
    else if (frames > 0) focusFirstProblem(form, frames - 1);
  });
}
