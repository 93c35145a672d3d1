import type { Control, SystemModel } from '@/lib/contracts/model';

export type Perturbed =
  | 'chemical reaction'
  | 'micro-organisms'
  | 'cells or tissue'
  | 'animal'
  | 'human volunteer'
  | 'device';

/** A published model, ready to be taken into a study. */
export interface LibraryModel {
  readonly id: string;
  readonly title: string;
  readonly summary: string;
  readonly source: {
    readonly authors: string;
    readonly year: number;
    readonly title: string;
    readonly where: string;
  };
  /** What is taken from the source, and what is this collection's own choice. */
  readonly provenance: string;
  readonly perturbs: Perturbed;
  readonly model: SystemModel;
  readonly control: Control;
  readonly doseLabel: string;
  /** UCUM code. */
  readonly doseUnit: string;
}
