export * from './types.ts';
export {
  CertificateWriter,
  embeddingText,
  fileInteger,
  stringMatrix,
  type CertificateParts,
  type EmbeddingRecord,
  type Sha256,
  type WriterBounds,
  type WriterOptions,
  type WrittenFile,
} from './writer.ts';
