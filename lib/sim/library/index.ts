import { chemostat } from './chemostat';
import { glycolysis } from './glycolysis';
import { pupil } from './pupil';
import { repressorLoop } from './repressor-loop';
import type { LibraryModel } from './types';

export type { LibraryModel, Perturbed } from './types';

/** The published models that a study can begin from. */
export const library: readonly LibraryModel[] = [chemostat, pupil, repressorLoop, glycolysis];
