import { type NextRequest, NextResponse } from 'next/server';
import { contentSecurityPolicy } from '@/lib/server/content-security-policy';

/**
 * Gives every page its own nonce. Next reads it from the policy in the request's headers and puts it
 * on its own scripts; pages read it from `x-nonce`. Sessions, roles and labs are checked by each page,
 * action and route itself, never here.
 */
export function proxy(request: NextRequest): NextResponse {
  const nonce = Buffer.from(crypto.randomUUID()).toString('base64');
  const policy = contentSecurityPolicy(nonce, process.env.NODE_ENV === 'development');
  const headers = new Headers(request.headers);
  headers.set('x-nonce', nonce);
  headers.set('Content-Security-Policy', policy);
  const response = NextResponse.next({ request: { headers } });
  response.headers.set('Content-Security-Policy', policy);
  return response;
}

export const config = {
  matcher: ['/((?!_next/static|_next/image|favicon.ico).*)'],
};
