/** Reads the draft in a worker while one types: a newer order ends the one before. Nothing is sent. */
import { onScopeDispose, ref, shallowRef, watch, type Ref, type ShallowRef } from 'vue';
import type {
  ArithmeticReading,
  PreviewFault,
  PreviewOrder,
  PreviewReport,
  QuickLook,
  SourceReading,
} from '../../workers/preview-messages.ts';

export interface Preview {
  readonly reading: ShallowRef<SourceReading | null>;
  readonly fault: ShallowRef<PreviewFault | null>;
  /** Elementary divisors of the discriminant group; null while it is being worked out. */
  readonly divisors: ShallowRef<readonly string[] | null>;
  readonly arithmetic: ShallowRef<ArithmeticReading | null>;
  readonly quick: ShallowRef<QuickLook | null>;
  readonly busy: Ref<boolean>;
  /** The reading that stands is of what was typed before. */
  readonly stale: Ref<boolean>;
}

/** Keys follow each other faster than this. */
const PAUSE_MS = 140;

/** @param order null: nothing to read */
export function usePreview(order: () => PreviewOrder | null): Preview {
  const reading = shallowRef<SourceReading | null>(null);
  const fault = shallowRef<PreviewFault | null>(null);
  const divisors = shallowRef<readonly string[] | null>(null);
  const arithmetic = shallowRef<ArithmeticReading | null>(null);
  const quick = shallowRef<QuickLook | null>(null);
  const busy = ref(false);
  const stale = ref(false);
  let worker: Worker | null = null;
  let timer: ReturnType<typeof setTimeout> | undefined;

  function stop(): void {
    clearTimeout(timer);
    if (!busy.value) return;
    worker?.terminate();
    worker = null;
    busy.value = false;
  }

  function take(report: PreviewReport): void {
    switch (report.kind) {
      case 'fault':
        fault.value = report.fault;
        reading.value = null;
        stale.value = false;
        break;
      case 'read':
        reading.value = report.reading;
        stale.value = false;
        break;
      case 'group':
        divisors.value = report.divisors;
        break;
      case 'arithmetic':
        arithmetic.value = report.arithmetic;
        break;
      case 'quick':
        quick.value = report.quick;
        break;
      case 'end':
        busy.value = false;
    }
  }

  function start(next: PreviewOrder): void {
    worker ??= new Worker(new URL('../../workers/preview-thread.ts', import.meta.url), { type: 'module' });
    worker.onmessage = ({ data }: MessageEvent<PreviewReport>) => take(data);
    worker.onerror = (event) => {
      take({
        kind: 'fault',
        fault: { path: '', message: event.message || 'the reading could not be started in this browser' },
      });
      stop();
    };
    worker.postMessage(next);
  }

  watch(
    () => JSON.stringify(order()),
    (text) => {
      stop();
      fault.value = null;
      divisors.value = null;
      arithmetic.value = null;
      quick.value = null;
      stale.value = reading.value !== null && text !== 'null';
      if (text === 'null') {
        reading.value = null;
        return;
      }
      busy.value = true;
      timer = setTimeout(() => start(JSON.parse(text) as PreviewOrder), reading.value === null ? 0 : PAUSE_MS);
    },
    { immediate: true },
  );

  onScopeDispose(() => {
    stop();
    worker?.terminate();
  });
  return { reading, fault, divisors, arithmetic, quick, busy, stale };
}
