import type { z } from 'zod';
import {
  boundaryRequest,
  designRequest,
  EngineError,
  estimateRequest,
  judgeRequest,
  layOutRequest,
  predictRequest,
  simulateRequest,
} from '@/lib/contracts';

/**
 * The engine's verbs at the command line. Each verb's code is loaded when it is asked for, so that
 * start-up costs no more than what is used.
 */
interface Verb {
  answer(request: unknown): Promise<unknown>;
}

function verb<S extends z.ZodType>(
  schema: S,
  load: () => Promise<(request: z.output<S>) => unknown>,
): Verb {
  return {
    async answer(request) {
      const parsed = schema.safeParse(request);
      if (!parsed.success) throw refusal(parsed.error.issues);
      return (await load())(parsed.data);
    },
  };
}

const VERBS: Readonly<Record<string, Verb>> = {
  predict: verb(predictRequest, async () => (await import('@/lib/sim/predict')).predict),
  boundary: verb(
    boundaryRequest,
    async () => (await import('@/lib/sim/boundary/boundary')).boundary,
  ),
  simulate: verb(
    simulateRequest,
    async () => (await import('@/lib/sim/integrate/simulate')).simulate,
  ),
  design: verb(designRequest, async () => (await import('@/lib/planner/design/design')).design),
  'lay-out': verb(
    layOutRequest,
    async () => (await import('@/lib/planner/lay-out/lay-out')).layOut,
  ),
  judge: verb(judgeRequest, async () => (await import('@/lib/evidence/judge/judge')).judge),
  estimate: verb(
    estimateRequest,
    async () => (await import('@/lib/evidence/estimate/estimate')).estimate,
  ),
};

type Issue = z.core.$ZodIssue;

/** The first thing to mend, with its dotted path; an unknown key is named itself. */
function refusal(issues: readonly Issue[]): EngineError {
  const { issue, path } = deepest(issues[0]!, []);
  if (issue.code === 'unrecognized_keys') {
    const key = issue.keys[0]!;
    return new EngineError('invalid-request', `${key} is not a known key here`, dotted(path, key));
  }
  return new EngineError('invalid-request', issue.message, dotted(path));
}

/** In a union the alternative that got furthest says most. */
function deepest(issue: Issue, above: PropertyKey[]): { issue: Issue; path: PropertyKey[] } {
  const path = [...above, ...issue.path];
  if (issue.code !== 'invalid_union' || issue.errors.length === 0) return { issue, path };
  const inner = issue.errors
    .filter((list) => list.length > 0)
    .map((list) => deepest(list[0]!, path))
    .sort((a, b) => b.path.length - a.path.length)[0];
  return inner && inner.path.length > path.length ? inner : { issue, path };
}

function dotted(path: readonly PropertyKey[], ...more: PropertyKey[]): string {
  return [...path, ...more].map(String).join('.');
}

function asError(error: unknown): { error: { code: string; message: string; at: string } } {
  if (error instanceof EngineError) {
    return { error: { code: error.code, message: error.message, at: error.at } };
  }
  const message = error instanceof Error ? error.message : String(error);
  return { error: { code: 'internal', message: message.split('\n')[0]!, at: '' } };
}

async function readInput(): Promise<string> {
  const parts: Buffer[] = [];
  for await (const part of process.stdin) parts.push(part as Buffer);
  return Buffer.concat(parts)
    .toString('utf8')
    .replace(/^\uFEFF/, '');
}

interface Command {
  readonly verb: Verb;
  readonly pretty: boolean;
}

function readCommand(args: readonly string[]): Command {
  const names = args.filter((a) => !a.startsWith('-'));
  const flag = args.find((a) => a.startsWith('-') && a !== '--pretty');
  if (flag) throw new EngineError('invalid-request', `${flag} is unknown; there is --pretty`, flag);
  const offered = Object.keys(VERBS).join(', ');
  const name = names[0];
  if (names.length !== 1 || name === undefined) {
    throw new EngineError('invalid-request', `give one verb of ${offered}`, 'verb');
  }
  const found = Object.hasOwn(VERBS, name) ? VERBS[name] : undefined;
  if (!found) {
    throw new EngineError(
      'invalid-request',
      `${name} is no verb of the engine; there are ${offered}`,
      'verb',
    );
  }
  return { verb: found, pretty: args.includes('--pretty') };
}

/** Reads the request from standard input, writes the answer to standard output; errors in place, exit status 2. */
export async function run(args: readonly string[]): Promise<void> {
  // A reader that closes early (head, say) is no failure of the engine's.
  process.stdout.on('error', () => process.exit());
  let failed = false;
  const attempt = async (work: () => Promise<unknown>): Promise<unknown> => {
    try {
      return await work();
    } catch (error) {
      failed = true;
      return asError(error);
    }
  };
  const output = await attempt(async () => {
    const { verb: chosen } = readCommand(args);
    const input = await readInput();
    const request = parseJson(input);
    if (!Array.isArray(request)) return attempt(() => chosen.answer(request));
    const answers: unknown[] = [];
    for (const one of request) answers.push(await attempt(() => chosen.answer(one)));
    return answers;
  });
  const text = JSON.stringify(output, null, args.includes('--pretty') ? 2 : undefined);
  process.exitCode = failed ? 2 : 0;
  await new Promise<void>((resolve) => process.stdout.write(`${text}\n`, () => resolve()));
}

function parseJson(input: string): unknown {
  try {
    return JSON.parse(input);
  } catch (error) {
    const why = error instanceof Error ? error.message.split('\n')[0] : '';
    throw new EngineError('invalid-request', `the request is not valid JSON: ${why}`, '');
  }
}
