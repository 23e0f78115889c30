export { compareAddresses, type Address, type Interval } from './address.ts';
export { chooseMethod, MethodCannot, type ChosenStage } from './choose-method.ts';
export { choosePlan, type SearchQuestion } from './choose-plan.ts';
export { cover, type CoverPiece } from './cover.ts';
export { embeddingMatrix, orbitSize, shortBasis, treeBasis, type Basis, type Embedding } from './embedding.ts';
export { estimate, type Estimate, type ProbeOptions } from './estimate.ts';
export type { FoundOrbit } from './found.ts';
export { METHODS, type Method } from './method.ts';
export { countColumns, gluingOf, whyNot } from './open-ladder.ts';
export { readPlan, type Plan, type PlanTarget } from './plan.ts';
export { MethodsDisagree, OrbitSet } from './second-opinion.ts';
export { openRun, Run, type Advance } from './run.ts';
export {
  nextStep,
  type Arithmetic,
  type ArithmeticGroundLike,
  type Conclusion,
  type Stage,
  type StageResult,
  type Step,
} from './stages.ts';
