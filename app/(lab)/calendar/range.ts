import { DateTime } from 'luxon';

export const calendarViews = ['day', 'week', 'month', 'list'] as const;
export type ShownView = (typeof calendarViews)[number];
export type ShownRange = {
  view: ShownView;
  /** Any moment of the shown day, week or month, as a date in the lab's zone. */
  date: string;
  from: Date;
  to: Date;
  who: 'everybody' | 'mine';
  studyId: string | null;
};

type Params = Record<string, string | string[] | undefined>;
const one = (value: string | string[] | undefined) => (Array.isArray(value) ? value[0] : value);

/** What the address asks to see; anything unreadable falls back to this week. */
export function readRange(params: Params, zone: string, now: Date): ShownRange {
  const view = calendarViews.find((v) => v === one(params.view)) ?? 'week';
  const asked = DateTime.fromISO(one(params.date) ?? '', { zone });
  const day = asked.isValid ? asked : DateTime.fromJSDate(now, { zone });
  const unit = view === 'list' ? 'week' : view;
  // A month's grid shows the days of its neighbours too.
  const grid = view === 'month' ? day.startOf('month').startOf('week') : day.startOf(unit);
  const end = view === 'month' ? day.endOf('month').endOf('week') : grid.plus({ [`${unit}s`]: 1 });
  const studyId = one(params.study) ?? null;
  return {
    view,
    date: day.toISODate() ?? '',
    from: grid.toJSDate(),
    to: end.toJSDate(),
    who: one(params.who) === 'mine' ? 'mine' : 'everybody',
    studyId: studyId && /^[0-9a-f-]{36}$/.test(studyId) ? studyId : null,
  };
}
