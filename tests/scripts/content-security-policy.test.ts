import { expect, test } from 'vitest';
import { contentSecurityPolicy } from '@/lib/server/content-security-policy';

function directive(policy: string, name: string): string[] {
  const found = policy.split('; ').find((text) => text.startsWith(`${name} `));
  return found?.split(' ').slice(1) ?? [];
}

test('in production nothing runs or is styled without the nonce', () => {
  const policy = contentSecurityPolicy('abc', false);
  expect(directive(policy, 'script-src')).toContain("'nonce-abc'");
  expect(directive(policy, 'style-src')).toContain("'nonce-abc'");
  for (const name of ['script-src', 'style-src', 'default-src']) {
    expect(directive(policy, name)).not.toContain("'unsafe-inline'");
    expect(directive(policy, name)).not.toContain("'unsafe-eval'");
  }
});

test('style attributes, by which charts and calendar place their parts, are allowed', () => {
  expect(directive(contentSecurityPolicy('abc', false), 'style-src-attr')).toEqual([
    "'unsafe-inline'",
  ]);
});

test('no other site may frame a page, take its forms or move its base', () => {
  const policy = contentSecurityPolicy('abc', false);
  expect(directive(policy, 'frame-ancestors')).toEqual(["'none'"]);
  expect(directive(policy, 'form-action')).toEqual(["'self'"]);
  expect(directive(policy, 'base-uri')).toEqual(["'self'"]);
  expect(directive(policy, 'object-src')).toEqual(["'none'"]);
});

test('development may evaluate code, as its server needs', () => {
  const policy = contentSecurityPolicy('abc', true);
  expect(directive(policy, 'script-src')).toContain("'unsafe-eval'");
  expect(directive(policy, 'style-src')).toEqual(["'self'", "'unsafe-inline'"]);
});
