'use server';

import { passwordForm } from '@/lib/contracts/forms/lab';
import { labAction } from '@/lib/server/action';
import { changePassword } from '@/lib/server/lab/change-password';

export const changePasswordAction = labAction({
  action: 'see',
  input: passwordForm,
  handle: changePassword,
});
