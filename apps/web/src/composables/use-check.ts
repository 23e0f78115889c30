/** “Check it here”: the independent checker in a worker, with progress, and a way to stop it. */
import { onScopeDispose, ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import type { Outcome } from '@palmette/checker';

export interface Check {
  readonly running: Ref<boolean>;
  /** 0 to 1 of the trees. */
  readonly share: Ref<number>;
  readonly outcome: ShallowRef<Outcome | null>;
  /** Set if the checker itself fell over: that is no rejection. */
  readonly fault: Ref<string>;
  readonly start: (bytes: Uint8Array) => void;
  readonly stop: () => void;
}

type Report =
  { readonly kind: 'progress'; readonly share: number } | { readonly kind: 'done'; readonly outcome: Outcome };

export function useCheck(): Check {
  const running = ref(false);
  const share = ref(0);
  const outcome = shallowRef<Outcome | null>(null);
  const fault = ref('');
  let worker: Worker | null = null;

  function stop(): void {
    worker?.terminate();
    worker = null;
    running.value = false;
  }

  function start(bytes: Uint8Array): void {
    stop();
    share.value = 0;
    outcome.value = null;
    fault.value = '';
    running.value = true;
    worker = new Worker(new URL('../workers/check-thread.ts', import.meta.url), { type: 'module' });
    worker.onmessage = ({ data }: MessageEvent<Report>) => {
      if (data.kind === 'progress') share.value = data.share;
      else {
        outcome.value = data.outcome;
        stop();
      }
    };
    worker.onerror = (event) => {
      fault.value = event.message || 'the checker could not be started in this browser';
      stop();
    };
    worker.postMessage(bytes);
  }

  onScopeDispose(stop);
  return { running, share, outcome, fault, start, stop };
}
