/**
 * Going about a trellis without a mouse: left and right among the vertices, up and down among the wires, E through the
 * edges of a vertex; Enter keeps, Esc lets go, Home and End go to the first and the last. Pure: a state and a key give
 * the next state.
 */
import { edgeBetween, type Aim } from './pointing.ts';
import type { Trellis } from './trellis.ts';

export interface Pointer {
  /** What is pointed at now. */
  readonly aim: Aim | null;
  /** What stays when the pointer goes away. */
  readonly kept: Aim | null;
}

export const AT_REST: Pointer = { aim: null, kept: null };

/** The state after a key, or null if the trellis has no use for it and the browser may. */
export function afterKey(trellis: Trellis, pointer: Pointer, key: string): Pointer | null {
  const { aim, kept } = pointer;
  const last = trellis.vertices.length - 1;
  if (last < 0) return null;
  switch (key) {
    case 'ArrowRight':
      return toVertex(trellis, pointer, aim === null ? 0 : Math.min(last, vertexOf(trellis, aim) + 1));
    case 'ArrowLeft':
      return toVertex(trellis, pointer, aim === null ? last : Math.max(0, vertexOf(trellis, aim) - 1));
    case 'ArrowDown':
      return toWire(trellis, pointer, aim?.kind === 'wire' ? aim.wire + 1 : 0);
    case 'ArrowUp':
      return toWire(trellis, pointer, aim?.kind === 'wire' ? aim.wire - 1 : trellis.wires.length - 1);
    case 'Home':
    case 'End': {
      const end = key === 'End';
      if (aim?.kind === 'wire') return toWire(trellis, pointer, end ? trellis.wires.length - 1 : 0);
      return toVertex(trellis, pointer, end ? last : 0);
    }
    case 'e':
    case 'E':
      return aim === null ? null : nextEdge(trellis, pointer, aim);
    case 'Enter':
    case ' ':
      return aim === null ? null : { aim, kept: aim };
    case 'Escape':
      return aim === null && kept === null ? null : AT_REST;
    default:
      return null;
  }
}

/** The mouse (or a finger) is over a part, or over none. A kept vertex and another one make a pair. */
export function afterHover(trellis: Trellis, pointer: Pointer, over: Aim | null): Pointer {
  if (over === null) return { ...pointer, aim: pointer.kept };
  return { ...pointer, aim: withKept(trellis, pointer.kept, over) };
}

/** A click keeps what is pointed at; a second one on the same lets go. */
export function afterClick(trellis: Trellis, pointer: Pointer, over: Aim | null): Pointer {
  if (over === null || same(over, pointer.kept)) return AT_REST;
  const aim = withKept(trellis, pointer.kept, over);
  return { aim, kept: aim };
}

function withKept(trellis: Trellis, kept: Aim | null, over: Aim): Aim {
  if (over.kind !== 'vertex' || kept?.kind !== 'vertex' || kept.vertex === over.vertex) return over;
  return pairOf(trellis, kept.vertex, over.vertex);
}

function pairOf(trellis: Trellis, a: number, b: number): Aim {
  const edge = edgeBetween(trellis, a, b);
  return edge >= 0 ? { kind: 'edge', edge, vertex: b } : { kind: 'pair', vertices: [a, b] };
}

function same(a: Aim, b: Aim | null): boolean {
  if (a.kind === 'edge' && b?.kind === 'edge') return a.edge === b.edge;
  return JSON.stringify(a) === JSON.stringify(b);
}

function toVertex(trellis: Trellis, pointer: Pointer, vertex: number): Pointer {
  return { ...pointer, aim: withKept(trellis, pointer.kept, { kind: 'vertex', vertex }) };
}

function toWire(trellis: Trellis, pointer: Pointer, wire: number): Pointer {
  const last = trellis.wires.length - 1;
  if (last < 0) return pointer;
  return { ...pointer, aim: { kind: 'wire', wire: Math.max(0, Math.min(last, wire)) } };
}

/** The vertex from which left and right go on: of a pair or an edge the one that was reached last. */
function vertexOf(trellis: Trellis, aim: Aim): number {
  switch (aim.kind) {
    case 'vertex':
      return aim.vertex;
    case 'pair':
      return aim.vertices[1];
    case 'edge':
      return aim.vertex ?? trellis.edges[aim.edge]!.to;
    case 'wire':
      return trellis.wires[aim.wire]!.entries[0]!.place;
  }
}

/** The edges of a vertex in turn; at an edge, the next one of the vertex from which it was reached. */
function nextEdge(trellis: Trellis, pointer: Pointer, aim: Aim): Pointer {
  const vertex = vertexOf(trellis, aim);
  const own = trellis.edges.flatMap(({ from, to }, edge) => (from === vertex || to === vertex ? [edge] : []));
  if (own.length === 0) return pointer;
  const at = aim.kind === 'edge' ? own.indexOf(aim.edge) : -1;
  return { ...pointer, aim: { kind: 'edge', edge: own[(at + 1) % own.length]!, vertex } };
}
