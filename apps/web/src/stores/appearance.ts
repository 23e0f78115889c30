/** Light, dark or as the system says; kept in the browser for the first paint and with the account for other machines. */
import { usePreferredDark } from '@vueuse/core';
import { defineStore } from 'pinia';
import { computed, ref, watch } from 'vue';

export type Appearance = 'system' | 'light' | 'dark';
const KEY = 'palmette.appearance';

function stored(): Appearance {
  const choice = document.documentElement.dataset.appearance;
  return choice === 'light' || choice === 'dark' ? choice : 'system';
}

export const useAppearance = defineStore('appearance', () => {
  const choice = ref<Appearance>(stored());
  const systemDark = usePreferredDark();
  const dark = computed(() => (choice.value === 'system' ? systemDark.value : choice.value === 'dark'));

  watch(
    choice,
    (now) => {
      if (now === 'system') delete document.documentElement.dataset.appearance;
      else document.documentElement.dataset.appearance = now;
      try {
        if (now === 'system') localStorage.removeItem(KEY);
        else localStorage.setItem(KEY, now);
      } catch {
        // Storage is switched off: the choice holds until this page is closed.
      }
    },
    { flush: 'sync' },
  );

  return { choice, dark };
});
