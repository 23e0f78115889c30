/** Reads something once when a component appears, and again on wish. What comes late to a page that is gone is dropped. */
import { onScopeDispose, ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import { isAborted } from '../api/errors.ts';

export interface Loaded<T> {
  /** Null before the first answer. */
  readonly value: ShallowRef<T | null>;
  readonly error: ShallowRef<unknown>;
  readonly busy: Ref<boolean>;
  readonly load: () => Promise<void>;
}

export function useLoaded<T>(read: (signal: AbortSignal) => Promise<T>): Loaded<T> {
  const value = shallowRef<T | null>(null);
  const error = shallowRef<unknown>(null);
  const busy = ref(false);
  let controller: AbortController | null = null;

  async function load(): Promise<void> {
    controller?.abort();
    const mine = new AbortController();
    controller = mine;
    busy.value = true;
    try {
      const answer = await read(mine.signal);
      if (mine.signal.aborted) return;
      value.value = answer;
      error.value = null;
    } catch (fault) {
      if (!mine.signal.aborted && !isAborted(fault)) error.value = fault;
    } finally {
      if (controller === mine) busy.value = false;
    }
  }

  onScopeDispose(() => controller?.abort());
  void load();
  return { value, error, busy, load };
}
