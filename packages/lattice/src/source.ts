/** Sources as a researcher types them. The shapes are those of the published interface; contracts checks them. */

export type SourceInteger = number | string;
export type SourcePair = readonly [SourceInteger, SourceInteger];
export type Orientation = 'entered' | 'reversed' | 'definite';

export interface MatrixSource {
  readonly kind: 'matrix';
  readonly rows: readonly (readonly SourceInteger[])[];
}
export interface TreeSource {
  readonly kind: 'tree';
  readonly vertices: readonly { readonly name: string; readonly weight: SourceInteger }[];
  readonly edges: readonly (readonly [string, string] | readonly [string, string, 1 | -1])[];
}
export interface FractionSource {
  readonly kind: 'fraction';
  readonly p: SourceInteger;
  readonly q: SourceInteger;
  readonly orientation: 'chain' | 'dual';
}
export interface SeifertSource {
  readonly kind: 'seifert';
  readonly centre: SourceInteger;
  readonly fibres: readonly SourcePair[];
  readonly orientation: Orientation;
}
export interface MontesinosSource {
  readonly kind: 'montesinos';
  readonly slopes?: readonly SourcePair[] | undefined;
  readonly pretzel?: readonly SourceInteger[] | undefined;
  readonly orientation: Orientation;
}
export interface DiagramSource {
  readonly kind: 'diagram';
  readonly pd: readonly (readonly [SourceInteger, SourceInteger, SourceInteger, SourceInteger])[];
  readonly colouring: 0 | 1;
}
export interface GraphSource {
  readonly kind: 'graph';
  readonly edges: readonly SourcePair[];
  readonly lattice: 'cuts' | 'flows';
}
export interface SumSource {
  readonly kind: 'sum';
  readonly of: readonly Source[];
}
export type Source =
  | MatrixSource
  | TreeSource
  | FractionSource
  | SeifertSource
  | MontesinosSource
  | DiagramSource
  | GraphSource
  | SumSource;

/** Most rows that a source may build. */
export const MAX_RANK = 2_500;

/** The source has the right shape and no lattice of ours. `path` is a JSON Pointer inside the source. */
export class SourceFault extends Error {
  override readonly name = 'SourceFault';
  constructor(
    readonly path: string,
    message: string,
    readonly code: 'source' | 'limit' = 'source',
  ) {
    super(message);
  }
}

/** A plumbing graph: what a picture draws and a matrix is made of. */
export interface Plumbing {
  readonly vertices: readonly { readonly name: string; readonly weight: bigint }[];
  readonly edges: readonly (readonly [number, number, 1 | -1])[];
}

/** A form before its sign is taken out. */
export interface BuiltForm {
  readonly form: bigint[][];
  readonly names: readonly string[];
  readonly graph: Plumbing | null;
  readonly remarks: readonly string[];
  readonly orientation?: 'entered' | 'reversed';
}
