/** The ladder of a stage by its method, and what all runs of a plan share: the working form, the dual, its admissible columns. */
import { fromPlanMatrix, type Plan } from './plan.ts';
import { admissibleColumns, type AdmissibleColumns, type Kept } from './admissible-columns.ts';
import { ColumnsLadder } from './columns-ladder.ts';
import { dualForm, type DualForm } from './dual-form.ts';
import { FewestLadder } from './fewest-ladder.ts';
import { rootsFit } from './frame-list.ts';
import { frameRoot, FramesLadder, type FrameRoot } from './frames-ladder.ts';
import { GlueLadder } from './glue-ladder.ts';
import { gluings, type Gluing } from './gluing.ts';
import { openRowLadder, type Ladder } from './ladder.ts';
import type { Method } from './method.ts';
import type { Stage } from './stages.ts';
import { workingForm, type WorkingForm } from './working-form.ts';

/** Memory that a list of columns may take: 4 bytes for each entry, 16 beside them. Above it the method is given up. */
const MAX_LIST_BYTES = 256 * 1024 * 1024;
/** Values that are tried while they are listed: some seconds. */
const MAX_LISTING_STEPS = 200_000_000;
/** Above this rank the dual is not computed: it costs the cube of the rank in big integers. */
const MAX_DUAL_RANK = 160;

interface Prepared {
  rows?: WorkingForm;
  dual?: DualForm | null;
  /** What was listed within so many steps. */
  readonly columns: Map<Kept, Tried>;
  readonly frames: Map<number, FrameRoot>;
  readonly gluings: Map<number, Gluing | null>;
}

interface Tried {
  readonly steps: number;
  readonly columns: AdmissibleColumns | null;
}

const prepared = new WeakMap<Plan, Prepared>();

function preparedFor(plan: Plan): Prepared {
  const known = prepared.get(plan);
  if (known !== undefined) return known;
  const fresh: Prepared = { frames: new Map(), columns: new Map(), gluings: new Map() };
  prepared.set(plan, fresh);
  return fresh;
}

export function rankOf(plan: Plan): number {
  return plan.order.length;
}

export function dualOf(plan: Plan): DualForm | null {
  const at = preparedFor(plan);
  if (at.dual === undefined) at.dual = rankOf(plan) > MAX_DUAL_RANK ? null : dualForm(fromPlanMatrix(plan.gram));
  return at.dual;
}

type StageOfColumns = Pick<Stage, 'method' | 'dimension'>;

/** The columns that a stage of frames or of columns is built from. */
function keptBy(plan: Plan, stage: StageOfColumns): Kept {
  const excess = stage.dimension - rankOf(plan);
  return stage.method === 'columns' || excess > 1 ? 'all' : excess === 1 ? 'square' : 'unit';
}

/**
 * The admissible columns that a stage is built from, listed once.
 * @returns null where doubles are not precise enough, or there are too many within `steps`
 */
export function columnsOf(plan: Plan, stage: StageOfColumns, steps = MAX_LISTING_STEPS): AdmissibleColumns | null {
  const { columns } = preparedFor(plan);
  const kind = keptBy(plan, stage);
  const known = columns.get(kind);
  if (known !== undefined && (known.columns !== null || steps <= known.steps)) return known.columns;
  const form = dualOf(plan);
  const listed =
    form === null
      ? null
      : admissibleColumns(form, kind, { steps, vectors: Math.floor(MAX_LIST_BYTES / (4 * rankOf(plan) + 16)) });
  columns.set(kind, { steps, columns: listed });
  return listed;
}

/** Lattices that are glued at most. */
const MOST_GLUED = 400;

/** The gluings of a plan for n = r or r + 1, made once; null where there are too many or d is not factored. */
export function gluingOf(plan: Plan, dimension: number): Gluing | null {
  const { gluings: known } = preparedFor(plan);
  const excess = dimension - rankOf(plan);
  if (excess !== 0 && excess !== 1) return null;
  if (!known.has(excess)) {
    const form = dualOf(plan);
    known.set(excess, form === null ? null : gluings(form.gram, form.determinant, excess, MOST_GLUED));
  }
  return known.get(excess)!;
}

/** A stage of frames from a list of columns, or by gluing where the list is too long; null where neither can be. */
export function framesStage(plan: Plan, stage: Stage): Stage | null {
  const listed: Stage = { ...stage, method: 'frames' };
  if (columnsOf(plan, listed) !== null) return listed;
  return gluingOf(plan, stage.dimension) === null ? null : { ...listed, glue: true };
}

/** Admissible columns that a finished stage of frames or columns listed: the `vectors` of its tree. */
export function countColumns(plan: Plan, stage: Stage): number {
  return columnsOf(plan, stage)?.admissible ?? 0;
}

/** Can the next row be chosen at each node? It is done in doubles, and costs the rank at each of them. */
export function canChooseRows(plan: Plan): boolean {
  const at = preparedFor(plan);
  return rankOf(plan) > 2 && rankOf(plan) <= MAX_DUAL_RANK && (at.rows ??= workingForm(plan)).small;
}

/** Why a method cannot list the embeddings in Z^n, in words, or null if it can. */
export function whyNot(method: Method, plan: Plan, dimension: number, whole: boolean): string | null {
  if (method === 'rows') return null;
  const excess = dimension - rankOf(plan);
  if (method === 'frames' && (whole || excess < 0 || excess > 2)) return 'frames need n = rank, rank + 1 or rank + 2';
  const form = dualOf(plan);
  if (form === null) return `the dual of this form is not listed (rank above ${MAX_DUAL_RANK} or entries above 2^15)`;
  if (form.direct === null && method === 'columns')
    return 'the determinant of this form is too big for doubles to be exact';
  if (method === 'frames' && excess > 0 && !rootsFit(form)) return 'the determinant of this form is above 2^100';
  return null;
}

export function openLadder(plan: Plan, stage: Stage): Ladder {
  const at = preparedFor(plan);
  if (stage.method === 'rows' || rankOf(plan) === 0) {
    const form = (at.rows ??= workingForm(plan));
    return stage.fewest === true ? new FewestLadder(form, stage.dimension) : openRowLadder(form, stage.dimension);
  }
  const excess = stage.dimension - rankOf(plan);
  if (stage.glue === true) return new GlueLadder(gluingOf(plan, stage.dimension)!, stage.dimension);
  const columns = columnsOf(plan, stage);
  if (columns === null) throw new RangeError(`the admissible columns cannot be listed for ${stage.method}`);
  if (stage.method === 'columns') return new ColumnsLadder(dualOf(plan)!, columns, stage.dimension);
  if (!at.frames.has(excess)) at.frames.set(excess, frameRoot(dualOf(plan)!, columns, excess));
  return new FramesLadder(at.frames.get(excess)!, stage.dimension);
}
