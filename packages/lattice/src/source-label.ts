/** A source in short, for tables, letters and titles. */
import type { Source } from './source.ts';

const LONGEST = 60;

const minus = (x: number | string): string => String(x).replace('-', '−');
const pairText = ([q, p]: readonly [number | string, number | string]): string => `${minus(q)}/${minus(p)}`;

export function sourceLabel(source: Source): string {
  const label = fullLabel(source);
  return label.length <= LONGEST ? label : `${label.slice(0, LONGEST - 1)}…`;
}

function fullLabel(source: Source): string {
  switch (source.kind) {
    case 'matrix':
      return `matrix ${source.rows.length} × ${source.rows.length}`;
    case 'tree':
      return `tree, ${source.vertices.length} ${source.vertices.length === 1 ? 'vertex' : 'vertices'}`;
    case 'fraction':
      return `${source.p}/${source.q}${source.orientation === 'dual' ? ', dual chain' : ''}`;
    case 'seifert':
      return `star ${minus(source.centre)}; ${source.fibres.map(pairText).join(', ')}`;
    case 'montesinos':
      return source.pretzel === undefined
        ? `M(${(source.slopes ?? []).map(pairText).join(', ')})`
        : `P(${source.pretzel.map(minus).join(', ')})`;
    case 'diagram':
      return `diagram, ${source.pd.length} crossings, colouring ${source.colouring}`;
    case 'graph':
      return `${source.lattice} of a graph, ${source.edges.length} edges`;
    case 'sum':
      return source.of.map(fullLabel).join(' + ');
  }
}
