/** Holds a big certificate off the main thread: parses it once and gives out pages of its embeddings. */
import { CertificateFile } from '../api/certificate-file.ts';

export type CertificateOrder =
  | { readonly kind: 'open'; readonly bytes: Uint8Array }
  | { readonly kind: 'page'; readonly no: number; readonly from: number; readonly to: number };

let file: CertificateFile | null = null;

onmessage = async ({ data }: MessageEvent<CertificateOrder>) => {
  try {
    if (data.kind === 'open') {
      file = CertificateFile.read(data.bytes);
      postMessage({ kind: 'opened', head: file.head, count: file.count });
    } else {
      postMessage({ kind: 'page', no: data.no, embeddings: await file!.page(data.from, data.to) });
    }
  } catch (error) {
    postMessage({ kind: 'failed', message: error instanceof Error ? error.message : String(error) });
  }
};
