/** The certificate of a question: fetched once, kept while the page is open. */
import { onScopeDispose, ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import type { CertificateView } from '../api/certificate-file.ts';
import { isAborted } from '../api/errors.ts';
import { getCertificate } from '../api/questions.ts';
import { openCertificate } from './open-certificate.ts';

export interface Certificate {
  readonly view: ShallowRef<CertificateView | null>;
  /** The bytes as they came, for the check and for nothing else. */
  readonly bytes: ShallowRef<Uint8Array | null>;
  readonly error: ShallowRef<unknown>;
  readonly busy: Ref<boolean>;
  /** Fetches it, unless it is here already. */
  readonly load: () => Promise<void>;
}

export function useCertificate(id: string): Certificate {
  const view = shallowRef<CertificateView | null>(null);
  const bytes = shallowRef<Uint8Array | null>(null);
  const error = shallowRef<unknown>(null);
  const busy = ref(false);
  const controller = new AbortController();

  onScopeDispose(() => {
    controller.abort();
    view.value?.close();
  });

  async function load(): Promise<void> {
    if (busy.value || view.value !== null) return;
    busy.value = true;
    error.value = null;
    try {
      bytes.value = await getCertificate(id, controller.signal);
      const opened = await openCertificate(bytes.value);
      if (controller.signal.aborted) opened.close();
      else view.value = opened;
    } catch (fault) {
      if (!isAborted(fault)) error.value = fault;
    } finally {
      busy.value = false;
    }
  }

  return { view, bytes, error, busy, load };
}
