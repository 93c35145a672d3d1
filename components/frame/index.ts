export { DayRule, type DayRuleProps, type DaySession } from './day-rule';
export { PageBody, SkipLink } from './page-body';
export { Places, type PlacesProps } from './places';
export { SignalLine, type Station } from './signal-line';
export { PageHead, StudyHead } from './study-head';
