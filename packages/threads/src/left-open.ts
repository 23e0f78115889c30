/** Why a question was left open, in words. */
export const BUDGET_USED_UP = 'the budget of CPU time is used up';

export function memoryUsedUp(bytes: number): string {
  return `a thread's bound of memory is used up (${Math.ceil(bytes / 1024 / 1024)} MiB counted)`;
}
