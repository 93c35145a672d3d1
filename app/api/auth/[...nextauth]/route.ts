import type { NextRequest } from 'next/server';
import NextAuth from 'next-auth';
import { authOptions } from '@/lib/server/auth';

type Context = { params: Promise<{ nextauth: string[] }> };
const handler = (request: NextRequest, context: Context) =>
  NextAuth(request as never, context as never, authOptions());

export { handler as GET, handler as POST };
