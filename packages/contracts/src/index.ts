export * from './states.ts';
export * from './limits.ts';
export * from './errors.ts';
export { readStrictJson, pointerStep, quoteShort, type StrictJson } from './strict-json.ts';
export { wireInteger, integerFault, describeValue, canonicalInteger, type WireInteger } from './integer.ts';
export * from './question.ts';
export {
  readQuestion,
  validateQuestion,
  validate,
  refusalFromSchema,
  canonicalQuestion,
  type CanonicalQuestion,
} from './read-question.ts';
export * as api from './api.ts';
export type * from './api.ts';
