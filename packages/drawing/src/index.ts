export * from './marks.ts';
export { isZero, numeral, signed, type DrawnInteger, type Numeral } from './numerals.ts';
export type { Graph, GraphEdge } from './graph.ts';
export { vertexOrder } from './order-vertices.ts';
export { BUNDLE_FROM, hangWires, type Wire, type WireEntry, type Wires } from './order-wires.ts';
export { sizeFor, SIZES, type Size, type SizeName } from './sizes.ts';
export {
  layTrellis,
  linesOf,
  SHOWN_RADICAL,
  type Trellis,
  type TrellisEdge,
  type TrellisInput,
  type TrellisOptions,
  type TrellisVertex,
  type TrellisWire,
} from './trellis.ts';
export { litMark, productMarks, readAim, type Aim, type Reading } from './pointing.ts';
export { afterClick, afterHover, afterKey, AT_REST, type Pointer } from './moving.ts';
export { LIGHT, PRINT, type Palette } from './palettes.ts';
export { drawingToSvg, pathData, type SvgOptions } from './svg.ts';
export { drawingToTikz, type TikzOptions } from './tikz.ts';
export { trellisOnPaper, type Fit } from './paper.ts';
export { matrixToLatex } from './latex-matrix.ts';
export { layTree, type TreeInput, type TreeOptions, type TreePicture, type TreeSizeName } from './tree.ts';
export { placeGraph, type Places } from './tree-places.ts';
export { arrangedMatrix, type ArrangedMatrix } from './arranged-matrix.ts';
