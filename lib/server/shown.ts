import { revalidatePath } from 'next/cache';
import type { ActionContext } from './action';

/** Has every page drawn anew after an operation: each of them shows the lab's day. */
export const shown =
  <I, T>(operation: (context: ActionContext, input: I) => Promise<T>) =>
  async (context: ActionContext, input: I): Promise<T> => {
    const done = await operation(context, input);
    revalidatePath('/', 'layout');
    return done;
  };
