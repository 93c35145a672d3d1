import { NARROW_SPACE, superscript } from './numbers';

const ATOMS: Record<string, string> = {
  '1': '',
  Cel: '\u00b0C',
  '[degF]': '\u00b0F',
  deg: '\u00b0',
  Ohm: '\u03a9',
  kOhm: 'k\u03a9',
  MOhm: 'M\u03a9',
  '[pH]': 'pH',
  '[ppm]': 'ppm',
  '[ppb]': 'ppb',
  '[lx]': 'lx',
  u: 'u',
  '10*': '10',
  '10^': '10',
};

/** One UCUM term (atom, prefix and exponent) as print; annotations in braces lose their braces. */
function term(code: string): string {
  const annotated = /^([^{]*)\{([^}]*)\}$/.exec(code);
  if (annotated) {
    const [, before = '', inside = ''] = annotated;
    const base = before === '' || before === '1' ? '' : term(before);
    return base === '' ? inside : `${base} ${inside}`;
  }
  const power = /^(10[*^]|\[[^\]]+\]|[A-Za-z%'"]+)([+-]?\d+)?$/.exec(code);
  if (!power) return ATOMS[code] ?? code;
  const [, atom = '', exponent = ''] = power;
  const shown = ATOMS[atom] ?? (/^u[A-Za-z]/.test(atom) ? `\u00b5${atom.slice(1)}` : atom);
  return shown + superscript(exponent.replace('+', ''));
}

/**
 * A UCUM code as it is printed: `umol/L` → `µmol/L`, `uA/cm2` → `µA/cm²`, `1/d` → `/d`,
 * `Cel` → `°C`, `{cells}/mL` → `cells/mL`. Unknown codes are shown as they are.
 */
export function unitText(code: string | null | undefined): string {
  if (!code) return '';
  return code
    .split(/(\/)|\.(?![^{]*\})/)
    .filter((part) => part !== undefined)
    .map((part) => (part === '/' ? '/' : term(part)))
    .reduce((text, part, i, all) => {
      const joined = i > 0 && part !== '/' && all[i - 1] !== '/' && text !== '' && part !== '';
      return text + (joined ? '\u00b7' : '') + part;
    }, '');
}

/** A figure already in print, with its unit after a narrow no-break space. */
export function withUnit(text: string, code: string | null | undefined): string {
  const unit = unitText(code);
  if (unit === '') return text;
  if (unit === '\u00b0') return text + unit;
  return text + NARROW_SPACE + unit;
}
