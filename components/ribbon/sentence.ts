import { MARK_STATES } from '@/components/marks/states';
import { figure, unitText, withUnit } from '@/lib/format';
import { observedFigures, predictedFigures } from './labels';
import type { RibbonData } from './types';

const listed = (parts: string[]): string =>
  parts.length < 2 ? parts.join('') : `${parts.slice(0, -1).join(', ')} and ${parts.at(-1)}`;

/** The ribbon in one sentence or a few, as its text alternative. */
export function ribbonSentence(data: RibbonData): string {
  const name = data.label ?? 'control parameter';
  const sentences = [
    `${name[0]?.toUpperCase() ?? ''}${name.slice(1)} from ${figure(data.from)} to ${withUnit(figure(data.to), data.unit)}.`,
    predicted(data),
    observed(data),
    levels(data),
  ];
  if (data.ceiling !== undefined) {
    sentences.push(`Ceiling at ${withUnit(figure(data.ceiling), data.unit)}.`);
  }
  if (data.here !== undefined) {
    sentences.push(`This level: ${withUnit(figure(data.here), data.unit)}.`);
  }
  return sentences.filter(Boolean).join(' ');
}

function predicted(data: RibbonData): string {
  if (data.onsets.length === 0)
    return `${capital(data.noOnset ?? 'No onset predicted in this range')}.`;
  const unit = unitText(data.unit);
  const each = data.onsets.map((onset) => {
    const abrupt = onset.coexistence
      ? `, abrupt, with coexistence from ${figure(onset.coexistence.from)} to ${figure(onset.coexistence.to)}`
      : '';
    return `${predictedFigures(onset, 'page')} ${unit} (oscillates ${onset.oscillates})${abrupt}`;
  });
  const stale = data.stale ? `, from ${data.stale}` : '';
  return `Onset${each.length > 1 ? 's' : ''} predicted at ${listed(each)}${stale}.`;
}

function observed(data: RibbonData): string {
  if (data.observed.length === 0) return 'No onset observed yet.';
  const unit = unitText(data.unit);
  return `Observed at ${listed(data.observed.map((o) => `${observedFigures(o)} ${unit}`))}.`;
}

function levels(data: RibbonData): string {
  const count = (state: string) => data.levels.filter((l) => l.state === state).length;
  const parts = ['planned', ...MARK_STATES]
    .map((state) => ({ state, n: count(state) }))
    .filter(({ n }) => n > 0)
    .map(({ state, n }) => `${n} ${state}`);
  return parts.length > 0 ? `Levels: ${listed(parts)}.` : '';
}

const capital = (text: string) => `${text[0]?.toUpperCase() ?? ''}${text.slice(1)}`;
