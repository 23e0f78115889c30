/** Polls one address for as long as a component is on the screen. */
import { onScopeDispose, shallowRef, type ShallowRef } from 'vue';
import type { Tagged } from '../api/client.ts';
import { isAborted } from '../api/errors.ts';
import { Poller } from './poller.ts';

export interface PollingOptions<T> {
  /** Milliseconds; 2 s and 15 s if left out. */
  readonly fastest?: number;
  readonly slowest?: number;
  /** False ends the polling: what was read will not change any more. */
  readonly goOn?: (value: T) => boolean;
}

export interface Polling<T> {
  /** What was read last; null before the first answer. */
  readonly value: ShallowRef<T | null>;
  /** Why the last round failed; null after one that did not. What was read before stays. */
  readonly error: ShallowRef<unknown>;
  /** Reads at once, and goes on from there. With `anew` an answer “as before” does not do: what is asked for changed. */
  readonly refresh: (anew?: 'anew') => void;
}

const browser = {
  setTimer: (run: () => void, ms: number) => window.setTimeout(run, ms),
  clearTimer: (timer: unknown) => window.clearTimeout(timer as number),
  visible: () => document.visibilityState === 'visible',
};

export function usePolling<T>(
  read: (etag: string | null, signal: AbortSignal) => Promise<Tagged<T>>,
  options: PollingOptions<T> = {},
): Polling<T> {
  const value = shallowRef<T | null>(null);
  const error = shallowRef<unknown>(null);
  let etag: string | null = null;

  const poller = new Poller(
    async (signal) => {
      try {
        const answer = await read(etag, signal);
        if (signal.aborted) return 'same';
        error.value = null;
        if (answer.value === null) return 'same';
        etag = answer.etag;
        value.value = answer.value;
        return options.goOn?.(answer.value) === false ? 'stop' : 'changed';
      } catch (fault) {
        if (!isAborted(fault)) error.value = fault;
        return 'failed';
      }
    },
    { fastest: options.fastest ?? 2_000, slowest: options.slowest ?? 15_000 },
    browser,
  );

  const onVisibility = () => poller.visibilityChanged();
  document.addEventListener('visibilitychange', onVisibility);
  onScopeDispose(() => {
    document.removeEventListener('visibilitychange', onVisibility);
    poller.stop();
  });
  poller.now();

  return {
    value,
    error,
    refresh: (anew) => {
      if (anew !== undefined) etag = null;
      poller.now();
    },
  };
}
