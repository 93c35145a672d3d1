import type { Role } from '../schema';

/** Everybody and everything here is invented. */
export const demoLab = {
  name: 'Ostra Harbour Laboratory',
  place: 'Berlin',
  timeZone: 'Europe/Berlin',
};

/** One password for all: the demo lab holds nothing that needs keeping from anybody. */
const password = 'hollow-then-solid';

export const demoPeople: {
  key: string;
  role: Role;
  name: string;
  email: string;
  skills: string[];
  hours: { rrule: string; from: string; to: string }[];
  maxMinutesPerDay: number | null;
}[] = [
  {
    key: 'head',
    role: 'head',
    name: 'Henrike Aldous',
    email: 'head@ostra.example',
    skills: ['flow rig', 'chemostat'],
    hours: [],
    maxMinutesPerDay: null,
  },
  {
    key: 'investigator',
    role: 'investigator',
    name: 'Ada Lindqvist',
    email: 'investigator@ostra.example',
    skills: ['flow rig', 'chemostat', 'plate reader'],
    hours: [{ rrule: 'FREQ=WEEKLY;BYDAY=MO,TU,WE,TH', from: '09:00', to: '17:00' }],
    maxMinutesPerDay: 180,
  },
  {
    key: 'technician',
    role: 'technician',
    name: 'Mira Okafor',
    email: 'technician@ostra.example',
    skills: ['flow rig', 'chemostat', 'plate reader'],
    hours: [{ rrule: 'FREQ=WEEKLY;BYDAY=MO,TU,WE,TH,FR', from: '07:00', to: '16:00' }],
    maxMinutesPerDay: 420,
  },
  {
    key: 'late',
    role: 'technician',
    name: 'Jonas Petterson-Wieczorek',
    email: 'late@ostra.example',
    skills: ['flow rig', 'chemostat', 'plate reader'],
    hours: [
      { rrule: 'FREQ=WEEKLY;BYDAY=MO,TU,WE,TH,FR', from: '11:00', to: '20:00' },
      { rrule: 'FREQ=WEEKLY;BYDAY=SA', from: '09:00', to: '14:00' },
    ],
    maxMinutesPerDay: 420,
  },
  {
    key: 'observer',
    role: 'observer',
    name: 'Teodor Brandt',
    email: 'observer@ostra.example',
    skills: [],
    hours: [],
    maxMinutesPerDay: null,
  },
];

export const demoRigs = [
  {
    key: 'chemostat',
    name: 'Chemostat bench',
    place: 'Room 2.14, cold side',
    capacity: 2,
    skills: ['chemostat'],
    recordsItself: false,
  },
  {
    key: 'flow',
    name: 'Flow reactor 1',
    place: 'Room 2.09',
    capacity: 1,
    skills: ['flow rig'],
    recordsItself: true,
  },
  {
    key: 'plate',
    name: 'Plate reader with pumps',
    place: 'Room 1.03',
    capacity: 3,
    skills: ['plate reader'],
    recordsItself: true,
  },
];

/** What `npm start` prints. */
export const demoSignIns = demoPeople.map(({ role, email }) => ({ role, email, password }));
export const demoPassword = password;
