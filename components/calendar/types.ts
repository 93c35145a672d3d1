/** A session as calendars show it. Instants are ISO 8601. */
export type CalendarSession = {
  id: string;
  revision: number;
  studyId: string;
  study: string;
  simulated: boolean;
  rigId: string;
  rig: string;
  personId: string;
  person: string;
  from: string;
  to: string;
  state: 'planned' | 'started' | 'done' | 'missed' | 'suspended' | 'cancelled';
  run: number;
  /** Dose with its unit, as printed. */
  dose: string;
  what: string;
  /** Where the dose lies on the ribbon: before, in or beyond the onset band. */
  place: 'steady' | 'undecided' | 'sustained';
  /** This person may move it. */
  movable: boolean;
};

export type CalendarPerson = { id: string; name: string };
export type CalendarView = 'day' | 'week' | 'month';
