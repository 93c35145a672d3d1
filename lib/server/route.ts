import type { NextRequest } from 'next/server';
import type { Db } from '@/db/client';
import { type Action, type Allowance, demand } from './authorise';
import { database } from './database';
import { AppError, problemOf, statusOf } from './errors';
import { log } from './log';
import { type Member, requireMember } from './member';

type RouteContext<P> = {
  db: Db;
  member: Member;
  allowance: Exclude<Allowance, 'no'>;
  params: P;
  now: Date;
};

/** A request that changes something must come from our own pages. */
function refuseForeignOrigin(request: NextRequest): void {
  if (request.method === 'GET' || request.method === 'HEAD') return;
  const origin = request.headers.get('origin');
  const host = request.headers.get('host');
  if (!origin || !host || new URL(origin).host !== host) {
    throw new AppError('forbidden', 'This request did not come from a page of this application.');
  }
}

export function problemResponse(error: unknown): Response {
  const problem = problemOf(error);
  return Response.json(
    { type: 'about:blank', title: problem.message, status: statusOf[problem.code], ...problem },
    {
      status: statusOf[problem.code],
      headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store' },
    },
  );
}

/** One wrapper for every route: authenticate, authorise, handle, problem response (RFC 9457). */
export function labRoute<P>(
  action: Action,
  handle: (context: RouteContext<P>, request: NextRequest) => Promise<unknown>,
) {
  return async (request: NextRequest, { params }: { params: Promise<P> }): Promise<Response> => {
    try {
      refuseForeignOrigin(request);
      const member = await requireMember();
      const allowance = demand(member.role, action);
      const context = { db: database(), member, allowance, params: await params, now: new Date() };
      const answer = await handle(context, request);
      if (answer instanceof Response) return answer;
      return Response.json(answer, { headers: { 'cache-control': 'no-store' } });
    } catch (error) {
      const response = problemResponse(error);
      if (response.status === 500)
        log.error({ err: error, path: request.nextUrl.pathname }, 'route');
      return response;
    }
  };
}
