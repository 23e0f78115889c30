/** The state of the tree editor: the drawn tree with its history, and what is chosen. */
import { computed, ref, shallowRef, type ComputedRef, type Ref } from 'vue';
import type { TreeDraft } from '../source/source-draft.ts';
import { begin, redo, step, undo, type History } from './history.ts';
import * as model from './tree-model.ts';

export type Chosen =
  | { readonly kind: 'vertex'; readonly name: string }
  | { readonly kind: 'edge'; readonly ends: readonly [string, string] };

export interface TreeEditorState {
  readonly drawn: ComputedRef<model.DrawnTree>;
  readonly chosen: Readonly<Ref<Chosen | null>>;
  /** The next vertex that is clicked is joined to the chosen one. */
  readonly joining: Readonly<Ref<boolean>>;
  readonly canUndo: ComputedRef<boolean>;
  readonly canRedo: ComputedRef<boolean>;
  readonly chosenVertex: ComputedRef<string | null>;
  choose(what: Chosen | null): void;
  setJoining(on: boolean): void;
  add(at: model.Point | null, joinTo?: string | null): string;
  weigh(name: string, weight: string): void;
  rename(from: string, to: string): void;
  join(a: string, b: string): void;
  part(a: string, b: string): void;
  sign(a: string, b: string, sign: 1 | -1): void;
  remove(name: string): void;
  removeChosen(): void;
  move(name: string, to: model.Point): void;
  tidy(): void;
  undo(): void;
  redo(): void;
  /** A tree that comes from elsewhere: typed, pasted, filled in. */
  take(tree: TreeDraft): void;
}

/** @param changed is told of every new tree */
export function useTreeEditor(first: TreeDraft, changed: (tree: TreeDraft) => void): TreeEditorState {
  const history = shallowRef<History<model.DrawnTree>>(begin(model.tidy(first)));
  const chosen = ref<Chosen | null>(null);
  const joining = ref(false);
  const drawn = computed(() => history.value.now);
  const chosenVertex = computed(() => (chosen.value?.kind === 'vertex' ? chosen.value.name : null));

  function to(next: History<model.DrawnTree>): void {
    const before = history.value.now.tree;
    history.value = next;
    const { tree } = next.now;
    const names = new Set(tree.vertices.map(({ name }) => name));
    const at = chosen.value;
    if (at !== null && !(at.kind === 'vertex' ? names.has(at.name) : model.hasEdge(tree, ...at.ends)))
      chosen.value = null;
    if (tree !== before) changed(tree);
  }
  const go = (next: model.DrawnTree, mark = '') => to(step(history.value, next, mark));

  return {
    drawn,
    chosen,
    joining,
    canUndo: computed(() => history.value.past.length > 0),
    canRedo: computed(() => history.value.future.length > 0),
    chosenVertex,
    choose: (what) => (chosen.value = what),
    setJoining: (on) => (joining.value = on),
    add(at, joinTo = chosenVertex.value) {
      const name = model.freshName(drawn.value.tree);
      go(model.addVertex(drawn.value, at, joinTo));
      chosen.value = { kind: 'vertex', name };
      return name;
    },
    weigh: (name, weight) => go(model.setWeight(drawn.value, name, weight), `weight ${name}`),
    rename(from, next) {
      go(model.rename(drawn.value, from, next));
      if (chosenVertex.value === from) chosen.value = { kind: 'vertex', name: next };
    },
    join(a, b) {
      joining.value = false;
      go(model.join(drawn.value, a, b));
    },
    part: (a, b) => go(model.part(drawn.value, a, b)),
    sign: (a, b, sign) => go(model.setSign(drawn.value, a, b, sign)),
    remove: (name) => go(model.removeVertex(drawn.value, name)),
    removeChosen() {
      const at = chosen.value;
      if (at === null) return;
      go(at.kind === 'vertex' ? model.removeVertex(drawn.value, at.name) : model.part(drawn.value, ...at.ends));
      chosen.value = null;
    },
    move: (name, point) => go(model.move(drawn.value, name, point), `move ${name}`),
    tidy: () => go(model.tidy(drawn.value.tree)),
    undo: () => to(undo(history.value)),
    redo: () => to(redo(history.value)),
    take(tree) {
      if (tree !== drawn.value.tree) go(model.tidy(tree));
    },
  };
}
