import type { MarkState } from '@/components/marks/states';

export type RibbonSize = 'list' | 'card' | 'page';
export type LevelState = MarkState | 'planned';

/** A predicted onset on the control axis with its band. */
export type PredictedOnset = {
  value: number;
  low: number;
  high: number;
  /** on which side of the value the steady state is unstable */
  oscillates: 'above' | 'below';
  /** 5, 10 … 95 % quantiles of the draws, ascending */
  quantiles?: number[];
  /** where steady state and large oscillation are both stable; makes the onset abrupt */
  coexistence?: { from: number; to: number } | null;
  /** replaces the figures in print */
  label?: string;
};

export type ObservedOnset = { value: number; low: number; high: number; label?: string };

export type RibbonLevel = {
  control: number;
  state: LevelState;
  /** arm of the series: rising marks stand in the upper lane, falling ones in the lower */
  direction?: 'up' | 'down';
  id?: string;
};

/** Relative amplitude along the control axis; only its shape is drawn. */
export type Envelope = { control: number[]; value: number[] };

export type RibbonData = {
  /** range of the control axis */
  from: number;
  to: number;
  /** UCUM code of the control parameter */
  unit: string;
  /** name of the control parameter, for the sentence */
  label?: string;
  onsets: PredictedOnset[];
  amplitude?: Envelope;
  /** control value at the ceiling dose; levels beyond it are forbidden */
  ceiling?: number;
  /** on which side of the ceiling the forbidden stretch lies; with an inhibiting dose map it is 'below' */
  ceilingSide?: 'above' | 'below';
  levels: RibbonLevel[];
  observed: ObservedOnset[];
  /** index pointer: the level at the bench now */
  here?: number;
  /** version that the prediction was made from, when a newer one exists */
  stale?: string;
  /** words for a range without an onset */
  noOnset?: string;
};
