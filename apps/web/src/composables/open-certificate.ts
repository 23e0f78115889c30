/** Opens the bytes of a certificate: here if it is small, in a worker if parsing it would hold up the page. */
import {
  CertificateFile,
  UnreadableCertificate,
  type CertificateView,
  type FileEmbedding,
  type FileHead,
} from '../api/certificate-file.ts';
import type { CertificateOrder } from '../workers/certificate-thread.ts';

/** Above this a parse is felt: about 10 ms a megabyte, and as much again for what it allocates. */
const HERE_UP_TO_BYTES = 1_000_000;

type Answer =
  | { readonly kind: 'opened'; readonly head: FileHead; readonly count: number }
  | { readonly kind: 'page'; readonly no: number; readonly embeddings: readonly FileEmbedding[] }
  | { readonly kind: 'failed'; readonly message: string };

/** @throws UnreadableCertificate */
export async function openCertificate(bytes: Uint8Array): Promise<CertificateView> {
  return bytes.length <= HERE_UP_TO_BYTES ? CertificateFile.read(bytes) : openInWorker(bytes);
}

function openInWorker(bytes: Uint8Array): Promise<CertificateView> {
  const worker = new Worker(new URL('../workers/certificate-thread.ts', import.meta.url), { type: 'module' });
  const order = (what: CertificateOrder) => worker.postMessage(what);
  const pages = new Map<number, (embeddings: readonly FileEmbedding[]) => void>();
  let asked = 0;

  return new Promise((resolve, reject) => {
    worker.onerror = () =>
      reject(new UnreadableCertificate('The certificate could not be read here; it can be downloaded.'));
    worker.onmessage = ({ data }: MessageEvent<Answer>) => {
      if (data.kind === 'failed') reject(new UnreadableCertificate(data.message));
      else if (data.kind === 'page') {
        pages.get(data.no)?.(data.embeddings);
        pages.delete(data.no);
      } else {
        resolve({
          head: data.head,
          count: data.count,
          page: (from, to) =>
            new Promise((done) => {
              asked += 1;
              pages.set(asked, done);
              order({ kind: 'page', no: asked, from, to });
            }),
          close: () => worker.terminate(),
        });
      }
    };
    order({ kind: 'open', bytes });
  });
}
