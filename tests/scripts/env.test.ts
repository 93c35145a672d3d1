import { describe, expect, test } from 'vitest';
import { EnvError, parseEnv } from '@/lib/server/env';

const complete = {
  DATABASE_PORT: '33061',
  DATABASE_USER: 'swaypoint',
  DATABASE_PASSWORD: 'secret',
  DATABASE_NAME: 'swaypoint',
  NEXTAUTH_SECRET: 'x'.repeat(32),
  SMTP_URL: 'smtp://127.0.0.1:3025',
};

function message(source: Record<string, string | undefined>): string {
  try {
    parseEnv(source);
  } catch (error) {
    if (error instanceof EnvError) return error.message;
    throw error;
  }
  return 'accepted';
}

describe('settings', () => {
  test('what is not set has the documented default', () => {
    expect(parseEnv(complete)).toMatchObject({
      PORT: 3000,
      DATA_DIR: '.data',
      DATABASE_HOST: '127.0.0.1',
      PUBLIC_URL: 'http://127.0.0.1:3000',
      NEXTAUTH_URL: 'http://127.0.0.1:3000',
    });
  });

  test('the public address follows the port unless it is set', () => {
    expect(parseEnv({ ...complete, PORT: '3100' }).PUBLIC_URL).toBe('http://127.0.0.1:3100');
    const own = { ...complete, PUBLIC_URL: 'https://swaypoint.example.org' };
    expect(parseEnv(own).NEXTAUTH_URL).toBe('https://swaypoint.example.org');
  });

  test('an empty setting counts as not set', () => {
    expect(parseEnv({ ...complete, PORT: '', CATCHER_URL: '' })).toMatchObject({ PORT: 3000 });
  });

  test('every setting at fault is named at once', () => {
    const text = message({
      ...complete,
      PORT: '70000',
      SMTP_URL: 'mail',
      DATABASE_USER: undefined,
    });
    expect(text).toContain('PORT');
    expect(text).toContain('SMTP_URL: must be an address like smtp://');
    expect(text).toContain('DATABASE_USER is not set');
  });

  test.each([
    ['a mail server that is a web address', { SMTP_URL: 'http://mail.example.org' }],
    ['a public address without protocol', { PUBLIC_URL: 'swaypoint.example.org' }],
    ['a public address that is a script', { PUBLIC_URL: 'javascript:alert(1)' }],
    ['a short session secret', { NEXTAUTH_SECRET: 'short' }],
    ['a database name that would need quoting', { DATABASE_NAME: 'a`; DROP' }],
    ['a port that is no number', { PORT: 'http' }],
  ])('%s is refused', (_, change) => {
    expect(() => parseEnv({ ...complete, ...change })).toThrow(EnvError);
  });

  test('secrets do not stand in the message', () => {
    const text = message({ ...complete, NEXTAUTH_SECRET: 'a-weak-secret', DATABASE_PORT: '' });
    expect(text).not.toContain('a-weak-secret');
    expect(text).not.toContain(complete.DATABASE_PASSWORD);
  });
});
