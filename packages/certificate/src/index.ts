export * from './types.ts';
export {
  CertificateWriter,
  embeddingText,
  fileInteger,
  stringMatrix,
  type CertificateParts,
  type EmbeddingRecord,
  type Sha256,
} from './writer.ts';
