import { AppError } from '../errors';

const AHEAD_MS = 2 * 60_000;
const LONG_AGO_MS = 14 * 86_400_000;

/** The device's time of a press; a clock that is plainly wrong is told, not believed. */
export function pressTime(at: string, now: Date): Date {
  const pressed = new Date(at);
  const ahead = pressed.getTime() - now.getTime();
  if (ahead > AHEAD_MS || ahead < -LONG_AGO_MS) {
    throw new AppError(
      'invalid-input',
      'The clock of this device is wrong: it says a time that cannot be.',
      { at: 'at', mend: 'Set the device’s clock, then press again.' },
    );
  }
  return ahead > 0 ? now : pressed;
}
