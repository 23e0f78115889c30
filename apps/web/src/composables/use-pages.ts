/** A list that comes in pages: the first when the component appears, the next when the reader asks for more. */
import { computed, ref, shallowRef, type ComputedRef, type Ref, type ShallowRef } from 'vue';
import type { Page } from '@palmette/contracts';
import { useLoaded } from './use-loaded.ts';
import { useTask } from './use-task.ts';

export interface Pages<T> {
  /** Null before the first answer. */
  readonly items: ComputedRef<readonly T[] | null>;
  readonly error: ComputedRef<unknown>;
  readonly more: ComputedRef<boolean>;
  readonly busy: Ref<boolean>;
  readonly loadMore: () => Promise<boolean>;
  /** From the first page again. */
  readonly reload: () => Promise<void>;
}

export function usePages<T>(read: (after: string | undefined, signal?: AbortSignal) => Promise<Page<T>>): Pages<T> {
  const later: ShallowRef<readonly T[]> = shallowRef([]);
  const cursor = ref<string | null>(null);
  const first = useLoaded(async (signal) => {
    const page = await read(undefined, signal);
    later.value = [];
    cursor.value = page.next;
    return page;
  });
  const next = useTask(async () => {
    if (cursor.value === null) return;
    const page = await read(cursor.value);
    later.value = [...later.value, ...page.items];
    cursor.value = page.next;
  });
  return {
    items: computed(() => (first.value.value === null ? null : [...first.value.value.items, ...later.value])),
    error: computed(() => first.error.value ?? next.error.value),
    more: computed(() => cursor.value !== null),
    busy: next.busy,
    loadMore: next.run,
    reload: first.load,
  };
}
