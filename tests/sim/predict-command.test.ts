import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import cases from '../reference/check-values.json';

const script = fileURLToPath(new URL('../../scripts/engine.mjs', import.meta.url));
const engine = (args: string[], input: string) => {
  const done = spawnSync(process.execPath, [script, ...args], { input, encoding: 'utf8' });
  return {
    status: done.status,
    answer: JSON.parse(done.stdout),
    text: done.stdout,
    err: done.stderr,
  };
};
const good = { ...cases[26]!.request, cycles: false };

describe('the engine command', () => {
  it('answers one request, and the same again to the last digit', () => {
    const one = engine(['predict'], JSON.stringify(good));
    expect(one.status).toBe(0);
    expect(one.answer.onsets).toHaveLength(1);
    expect(one.answer.onsets[0].value).toBeCloseTo(2, 9);
    expect(engine(['predict'], JSON.stringify(good)).text).toBe(one.text);
    const pretty = engine(['predict', '--pretty'], JSON.stringify(good));
    expect(pretty.answer).toEqual(one.answer);
    expect(pretty.text.split('\n').length).toBeGreaterThan(10);
  });

  it('answers an array in order, errors in their place, exit status 2', () => {
    const equations = { ...good.model.equations, x: 'A - (B + 1)*x +' };
    const wrong = { ...good, model: { ...good.model, equations } };
    const { status, answer, err } = engine(['predict'], JSON.stringify([wrong, good]));
    expect(status).toBe(2);
    expect(answer[0].error.code).toBe('invalid-equation');
    expect(answer[0].error.at).toBe('model.equations.x');
    expect(answer[1].onsets).toHaveLength(1);
    expect(err).toBe('');
  });

  it('refuses with a path what it cannot read: JSON, verbs, flags, keys, values', () => {
    const commands: [string[], string, string][] = [
      [['predict'], '{"model": ', ''],
      [['foretell'], '{}', 'verb'],
      [['predict', '--loud'], '{}', '--loud'],
    ];
    for (const [args, input, at] of commands) {
      const { status, answer, text } = engine(args, input);
      expect([status, answer.error.code, answer.error.at]).toEqual([2, 'invalid-request', at]);
      expect(text).not.toContain('.mjs');
    }
    const { model } = good;
    const requests: [object, string][] = [
      [{ ...good, colour: 1 }, 'colour'],
      [{ ...good, draws: -1 }, 'draws'],
      [{ ...good, control: { symbol: 'B', from: 4, to: 1 } }, 'control.from'],
      [{ ...good, control: { symbol: 'Q', from: 1, to: 4 } }, 'control.symbol'],
      [
        { ...good, model: { ...model, parameters: [{ symbol: 'A', value: '1' }] } },
        'model.parameters.0.value',
      ],
    ];
    const { status, answer } = engine(['predict'], JSON.stringify(requests.map((r) => r[0])));
    expect(status).toBe(2);
    requests.forEach(([, at], i) => {
      expect([answer[i].error.code, answer[i].error.at]).toEqual(['invalid-request', at]);
    });
  });
});
