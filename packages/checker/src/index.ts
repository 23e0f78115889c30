export {
  check,
  CHECKER_REVISION,
  concludeCheck,
  openCheck,
  type CheckOptions,
  type CheckWork,
  type Outcome,
  type TreeCount,
} from './check.ts';
export { openCheckRun, splitCheck, type CheckInterval, type CheckRun, type CheckTree } from './tree.ts';
