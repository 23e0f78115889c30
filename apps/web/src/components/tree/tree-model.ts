/** What can be done to a drawn tree. Pure: each step gives a new tree. */
import { placeGraph } from '@palmette/drawing';
import type { TreeDraft, TreeEdge } from '../source/source-draft.ts';

export interface Point {
  readonly x: number;
  readonly y: number;
}
export type Points = Readonly<Record<string, Point>>;

/** A tree with the places of its vertices: what undo goes back to. */
export interface DrawnTree {
  readonly tree: TreeDraft;
  readonly points: Points;
}

/** The weight that a new vertex has until another one is typed. */
export const NEW_WEIGHT = '-2';
const PITCH_X = 64;
const PITCH_Y = 64;
const MARGIN = 40;

/** v1, v2, …: the first that no vertex has. */
export function freshName(tree: TreeDraft): string {
  const taken = new Set(tree.vertices.map(({ name }) => name));
  for (let k = 1; ; k += 1) if (!taken.has(`v${k}`)) return `v${k}`;
}

export function hasEdge(tree: TreeDraft, a: string, b: string): boolean {
  return tree.edges.some((edge) => joins(edge, a, b));
}

export function joins([p, q]: TreeEdge, a: string, b: string): boolean {
  return (p === a && q === b) || (p === b && q === a);
}

export function addVertex({ tree, points }: DrawnTree, at: Point | null, joinTo: string | null): DrawnTree {
  const name = freshName(tree);
  return {
    tree: {
      vertices: [...tree.vertices, { name, weight: NEW_WEIGHT }],
      edges: joinTo === null ? tree.edges : [...tree.edges, [joinTo, name, 1]],
    },
    points: { ...points, [name]: at ?? freePoint(points, joinTo) },
  };
}

export function setWeight({ tree, points }: DrawnTree, name: string, weight: string): DrawnTree {
  return {
    points,
    tree: { ...tree, vertices: tree.vertices.map((v) => (v.name === name ? { ...v, weight } : v)) },
  };
}

/** Gives a vertex another name, in its edges too. A name that is taken changes nothing. */
export function rename(drawn: DrawnTree, from: string, to: string): DrawnTree {
  const { tree, points } = drawn;
  if (from === to || tree.vertices.some(({ name }) => name === to)) return drawn;
  const named = (name: string) => (name === from ? to : name);
  return {
    tree: {
      vertices: tree.vertices.map((v) => ({ ...v, name: named(v.name) })),
      edges: tree.edges.map(([a, b, sign]): TreeEdge => [named(a), named(b), sign]),
    },
    points: Object.fromEntries(Object.entries(points).map(([name, point]) => [named(name), point])),
  };
}

/** An edge between two different vertices that have none yet. */
export function join(drawn: DrawnTree, a: string, b: string): DrawnTree {
  if (a === b || hasEdge(drawn.tree, a, b)) return drawn;
  return { ...drawn, tree: { ...drawn.tree, edges: [...drawn.tree.edges, [a, b, 1]] } };
}

export function part(drawn: DrawnTree, a: string, b: string): DrawnTree {
  return { ...drawn, tree: { ...drawn.tree, edges: drawn.tree.edges.filter((edge) => !joins(edge, a, b)) } };
}

export function setSign(drawn: DrawnTree, a: string, b: string, sign: 1 | -1): DrawnTree {
  const edges = drawn.tree.edges.map((edge): TreeEdge => (joins(edge, a, b) ? [edge[0], edge[1], sign] : edge));
  return { ...drawn, tree: { ...drawn.tree, edges } };
}

export function removeVertex({ tree, points }: DrawnTree, name: string): DrawnTree {
  return {
    tree: {
      vertices: tree.vertices.filter((v) => v.name !== name),
      edges: tree.edges.filter(([a, b]) => a !== name && b !== name),
    },
    points: Object.fromEntries(Object.entries(points).filter(([key]) => key !== name)),
  };
}

export function move({ tree, points }: DrawnTree, name: string, to: Point): DrawnTree {
  return { tree, points: { ...points, [name]: to } };
}

/** Places all vertices anew: as the picture under “As read” has them, or in rows where it has none. */
export function tidy(tree: TreeDraft): DrawnTree {
  const number = new Map(tree.vertices.map(({ name }, i) => [name, i]));
  const edges = tree.edges.flatMap(([a, b]): [number, number, number][] =>
    number.has(a) && number.has(b) ? [[number.get(a)!, number.get(b)!, 1]] : [],
  );
  const places = placeGraph({ size: tree.vertices.length, edges });
  const points: Record<string, Point> = {};
  if (places === null) {
    tree.vertices.forEach(({ name }, i) => {
      points[name] = { x: MARGIN + (i % 12) * PITCH_X, y: MARGIN + Math.floor(i / 12) * PITCH_Y };
    });
  } else {
    for (const { vertex, column, row } of places.vertices)
      points[tree.vertices[vertex]!.name] = { x: MARGIN + column * PITCH_X, y: MARGIN + row * PITCH_Y };
  }
  return { tree, points };
}

/** Right of the vertex that it is joined to, or of everything, where nothing stands yet. */
function freePoint(points: Points, joinTo: string | null): Point {
  const all = Object.values(points);
  const from = joinTo === null ? undefined : points[joinTo];
  const x = from === undefined ? Math.max(MARGIN - PITCH_X, ...all.map((p) => p.x)) + PITCH_X : from.x + PITCH_X;
  let y = from?.y ?? MARGIN;
  while (all.some((p) => Math.abs(p.x - x) < PITCH_X / 2 && Math.abs(p.y - y) < PITCH_Y / 2)) y += PITCH_Y;
  return { x, y };
}
