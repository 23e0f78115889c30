/**
 * A second opinion: the tree that carries a conclusion is searched again by another method, and the two must list the same
 * orbits. They share no bound and no order, so agreement means something; a disagreement is a fault of ours and is never an answer.
 */
import type { FoundOrbit } from './found.ts';
import type { Method } from './method.ts';
import { columnsOf, framesStage, whyNot } from './open-ladder.ts';
import type { Plan } from './plan.ts';
import type { Conclusion, Stage, StageResult, Step } from './stages.ts';

/** Two methods list different orbits. */
export class MethodsDisagree extends Error {
  override readonly name = 'MethodsDisagree';
  constructor(
    readonly first: StageResult,
    readonly second: StageResult,
  ) {
    const said = (r: StageResult) => `${r.method} list ${r.orbits} orbits (set ${r.set ?? 'not kept'})`;
    super(`two methods disagree at n = ${first.dimension}: ${said(first)}, ${said(second)}`);
  }
}

/** @throws MethodsDisagree */
export function withSecondOpinion(plan: Plan, conclusion: Conclusion, results: readonly StageResult[]): Step {
  const carrier = conclusion.listComplete ? (conclusion.listStage ?? conclusion.exclusion?.stage) : undefined;
  const first = results.find((r) => r.no === carrier);
  if (first === undefined) return { conclusion };
  const second = results.find((r) => r.repeats === first.no);
  if (second === undefined) {
    const stage = otherMethod(plan, first, {
      no: results.length,
      dimension: first.dimension,
      purpose: 'all',
      whole: first.whole,
      method: 'rows',
      why: '',
      repeats: first.no,
    });
    return stage === null ? { conclusion } : { stage: { ...stage, why: `Second opinion: ${stage.method}.` } };
  }
  if (first.orbits !== second.orbits || first.set !== second.set) throw new MethodsDisagree(first, second);
  return {
    conclusion: {
      ...conclusion,
      listStage: conclusion.listStage === null ? null : second.no,
      secondStage: first.no,
      exclusion:
        conclusion.exclusion?.stage === first.no && conclusion.listStage === null
          ? { ...conclusion.exclusion, stage: second.no }
          : conclusion.exclusion,
    },
  };
}

/** Frames where n − r ≤ 1, else columns, against rows; rows against both. Null where no other can. */
function otherMethod(plan: Plan, first: StageResult, stage: Stage): Stage | null {
  if (first.method !== 'rows') return stage;
  const can = (method: Method) => whyNot(method, plan, first.dimension, first.whole) === null;
  const frames = can('frames') ? framesStage(plan, stage) : null;
  if (frames !== null && first.dimension - plan.order.length <= 1) return frames;
  const columns: Stage = { ...stage, method: 'columns' };
  return can('columns') && columnsOf(plan, columns) !== null ? columns : frames;
}

const MASK = 0xffffffffffffffffn;

/** A set of orbits as a number that does not depend on their order: the sum modulo 2^64 of a hash of each. */
export class OrbitSet {
  private sum = 0n;

  add(orbit: FoundOrbit): void {
    const columns = orbit.columns
      .map(({ entries, count }) => {
        const lead = entries.map(BigInt).find((x) => x !== 0n)!;
        return `${lead < 0n ? entries.map((x) => -BigInt(x)).join(' ') : entries.join(' ')}*${count}`;
      })
      .sort();
    let hash = 0xcbf29ce484222325n; // FNV-1a of 64 bits
    for (const character of columns.join(';'))
      hash = ((hash ^ BigInt(character.charCodeAt(0))) * 0x100000001b3n) & MASK;
    this.sum = (this.sum + hash) & MASK;
  }

  toString(): string {
    return this.sum.toString(16).padStart(16, '0');
  }
}
