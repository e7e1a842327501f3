import { computed, ref } from 'vue';
import { defineStore } from 'pinia';
import type { SignIn, User } from '../../shared/api/session.ts';
import { ApiProblem } from '../api/client.ts';
import * as calls from '../api/session.ts';

/** Who is signed in. `known` turns true once the server has been asked. */
export const useSession = defineStore('session', () => {
  const user = ref<User | null>(null);
  const known = ref(false);

  /** Asks the server once; a person who is not signed in is no failure. */
  async function ask(): Promise<User | null> {
    if (known.value) return user.value;
    try {
      user.value = (await calls.readSession()).user;
    } catch (error) {
      if (!(error instanceof ApiProblem) || error.status !== 401) throw error;
      user.value = null;
    }
    known.value = true;
    return user.value;
  }

  async function signIn(body: SignIn): Promise<void> {
    user.value = (await calls.signIn(body)).user;
    known.value = true;
  }

  async function signOut(): Promise<void> {
    await calls.signOut();
    forget();
  }

  /** The server no longer knows this session. */
  function forget(): void {
    user.value = null;
    known.value = true;
  }

  return { user: computed(() => user.value), known: computed(() => known.value), ask, signIn, signOut, forget };
});
