/** Reads what an admin typed as an allowance; each fault names expectation and finding. */
import type { Allowance } from '@palmette/contracts';

export interface ReadAllowance {
  readonly allowance: Allowance | null;
  readonly faults: { readonly workers: string; readonly hours: string };
}

/** The bounds of the API. */
const MOST_WORKERS = 10_000;
const MOST_SECONDS = 100_000_000;

export function readAllowance(workersText: string, hoursText: string): ReadAllowance {
  const workers = /^\d{1,6}$/.test(workersText.trim()) ? Number(workersText) : Number.NaN;
  const seconds = /^\d{1,7}(?:\.\d+)?$/.test(hoursText.trim()) ? Math.round(Number(hoursText) * 3600) : Number.NaN;
  const faults = {
    workers:
      workers <= MOST_WORKERS
        ? ''
        : `Expected a whole number from 0 to ${MOST_WORKERS}, found “${workersText.trim()}”.`,
    hours:
      seconds <= MOST_SECONDS
        ? ''
        : `Expected hours from 0 to ${Math.floor(MOST_SECONDS / 3600)}, found “${hoursText.trim()}”.`,
  };
  const sound = faults.workers === '' && faults.hours === '';
  return { allowance: sound ? { workers, cpuSecondsPerDay: seconds } : null, faults };
}
