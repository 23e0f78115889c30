/** The three ways to list embeddings. FORMAT.md, section 7, says what each one lists and why nothing is missed. */

export const METHODS = ['rows', 'columns', 'frames'] as const;
export type Method = (typeof METHODS)[number];
