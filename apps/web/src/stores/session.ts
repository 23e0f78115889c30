/** Who is signed in. The truth is the server's cookie; this is what the page knows of it. */
import { defineStore } from 'pinia';
import { computed, ref } from 'vue';
import type { Person } from '@palmette/contracts';
import { whenSignedOut } from '../api/client.ts';
import { ApiError, UnreachableError } from '../api/errors.ts';
import * as api from '../api/session.ts';
import { useAppearance } from './appearance.ts';
import { keepSignedInHint, mayBeSignedIn } from './signed-in-hint.ts';

export const useSession = defineStore('session', () => {
  const person = ref<Person | null>(null);
  /** False until the server was asked once. */
  const known = ref(false);
  /** True when a session ended under the reader's hands, so that the sign-in page can say why it stands there. */
  const ended = ref(false);
  /** True while the server cannot be asked who this is. */
  const away = ref(false);

  const isAdmin = computed(() => person.value?.role === 'admin');
  /** A reader of the group looks and downloads, and asks nothing. */
  const mayAsk = computed(() => person.value !== null && person.value.role !== 'reader');

  whenSignedOut(() => {
    if (person.value !== null) ended.value = true;
    person.value = null;
    keepSignedInHint(false);
  });

  /** Asks the server once who this is, unless nobody was ever signed in here. */
  async function load(): Promise<void> {
    away.value = false;
    if (!mayBeSignedIn()) {
      known.value = true;
      return;
    }
    try {
      person.value = (await api.whoAmI()).person;
      known.value = true;
      keepSignedInHint(true);
    } catch (error) {
      person.value = null;
      known.value = error instanceof ApiError && error.code === 'signed-out';
      away.value = !known.value;
    }
  }

  async function signIn(email: string, password: string): Promise<void> {
    person.value = (await api.signIn(email, password)).person;
    known.value = true;
    ended.value = false;
    keepSignedInHint(true);
    await adoptAppearance();
  }

  /** Light or dark as it was chosen on another machine. */
  async function adoptAppearance(): Promise<void> {
    try {
      useAppearance().choice = (await api.getAccount()).appearance;
    } catch (error) {
      // Nobody is kept out because of a colour.
      if (!(error instanceof ApiError) && !(error instanceof UnreachableError)) throw error;
    }
  }

  async function signOut(): Promise<void> {
    await api.signOut();
    person.value = null;
    keepSignedInHint(false);
  }

  function rename(name: string): void {
    if (person.value !== null) person.value = { ...person.value, name };
  }

  return { person, known, ended, away, isAdmin, mayAsk, load, signIn, signOut, rename };
});
