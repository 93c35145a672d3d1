import type { SystemDraft } from './draft';

/** What each part of the system form is given. */
export type SectionProps = {
  draft: SystemDraft;
  change: (part: Partial<SystemDraft>) => void;
  problemAt: (at: string) => string | undefined;
};
