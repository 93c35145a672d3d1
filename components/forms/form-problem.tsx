import type { ReactNode } from 'react';

export type Problem = {
  /** what is wrong */
  what: ReactNode;
  /** the field or line it is in */
  where?: ReactNode;
  /** how to mend it */
  how?: ReactNode;
  /** id of the control, to go there */
  fieldId?: string;
};

/** What is wrong, where, and how to mend it; read out as soon as it appears. */
export function FormProblem({ problems }: { problems: Problem | Problem[] | null | undefined }) {
  const list = problems == null ? [] : Array.isArray(problems) ? problems : [problems];
  if (list.length === 0) return null;
  return (
    <div role="alert" className="rounded-key border-2 border-ink bg-plate px-4 py-3">
      <ul className="flex flex-col gap-2">
        {list.map((problem, i) => (
          <li key={problem.fieldId ?? `problem-${i + 1}`}>
            <p className="font-semibold">
              {problem.where ? <Where problem={problem} /> : null}
              {problem.what}
            </p>
            {problem.how ? <p className="text-ink2">{problem.how}</p> : null}
          </li>
        ))}
      </ul>
    </div>
  );
}

function Where({ problem }: { problem: Problem }) {
  return problem.fieldId ? (
    <>
      <a href={`#${problem.fieldId}`} className="underline">
        {problem.where}
      </a>
      {': '}
    </>
  ) : (
    <>
      {problem.where}
      {': '}
    </>
  );
}
