import type { level, seriesVersion, study } from '@/db/schema';

export type Study = typeof study.$inferSelect;
export type SeriesVersion = typeof seriesVersion.$inferSelect;
export type Level = typeof level.$inferSelect;
export type { Envelope, Scheme } from '@/db/schema';
