'use server';

import {
  absenceForm,
  hoursForm,
  membershipForm,
  personForm,
  removeForm,
  rigForm,
} from '@/lib/contracts/forms/lab';
import { labAction } from '@/lib/server/action';
import { addPerson } from '@/lib/server/lab/add-person';
import { changeMembership } from '@/lib/server/lab/change-membership';
import { addAbsence, addHours, removeAbsence, removeHours } from '@/lib/server/lab/hours';
import { saveRig } from '@/lib/server/lab/save-rig';
import { shown } from '@/lib/server/shown';

export const addPersonAction = labAction({
  action: 'manage people',
  input: personForm,
  handle: shown(addPerson),
});
export const changeMembershipAction = labAction({
  action: 'manage people',
  input: membershipForm,
  handle: shown(changeMembership),
});
export const saveRigAction = labAction({
  action: 'manage rigs',
  input: rigForm,
  handle: shown(saveRig),
});
export const addHoursAction = labAction({
  action: 'manage hours',
  input: hoursForm,
  handle: shown(addHours),
});
export const removeHoursAction = labAction({
  action: 'manage hours',
  input: removeForm,
  handle: shown(removeHours),
});
export const addAbsenceAction = labAction({
  action: 'manage hours',
  input: absenceForm,
  handle: shown(addAbsence),
});
export const removeAbsenceAction = labAction({
  action: 'manage hours',
  input: removeForm,
  handle: shown(removeAbsence),
});
