/** One thing that a button sets off: busy while it runs, and what went wrong if it did. */
import { ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import { isAborted } from '../api/errors.ts';

export interface Task<A extends unknown[]> {
  readonly busy: Ref<boolean>;
  readonly error: ShallowRef<unknown>;
  /** True if it went through. While it runs, a second press does nothing. */
  readonly run: (...args: A) => Promise<boolean>;
}

export function useTask<A extends unknown[]>(work: (...args: A) => Promise<void>): Task<A> {
  const busy = ref(false);
  const error = shallowRef<unknown>(null);
  return {
    busy,
    error,
    run: async (...args) => {
      if (busy.value) return false;
      busy.value = true;
      error.value = null;
      try {
        await work(...args);
        return true;
      } catch (fault) {
        if (!isAborted(fault)) error.value = fault;
        return false;
      } finally {
        busy.value = false;
      }
    },
  };
}
