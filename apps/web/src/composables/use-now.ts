/** The time, told anew every second, for what is said relative to it. One clock for all who ask. */
import { createSharedComposable, useNow as everySecond } from '@vueuse/core';
import { computed } from 'vue';

/** Milliseconds since 1970. */
export const useNow = createSharedComposable(() => {
  const date = everySecond({ interval: 1_000 });
  return computed(() => date.value.getTime());
});
