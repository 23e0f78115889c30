/** What was measured, one line a figure, so that a run may be made in portions and the tables be printed from all of them. */
import { appendFileSync, existsSync, mkdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Answer } from './solver.ts';

export interface PeerRecord extends Answer {
  readonly instance: string;
  readonly solver: string;
  readonly limit: number;
  /** How many runs the CPU time is the median of. */
  readonly runs: number;
  /** Not run because the same solver was over the limit at a smaller rank of the same kind. */
  readonly skipped?: boolean;
}

const folder = join(fileURLToPath(new URL('../../..', import.meta.url)), '.palmette/bench');

export function recordFile(name: string): string {
  return join(folder, `${name}.jsonl`);
}

export function readRecords<T>(file: string): T[] {
  if (!existsSync(file)) return [];
  const lines = readFileSync(file, 'utf8').split('\n').filter(Boolean);
  return lines.map((line) => JSON.parse(line) as T);
}

export function addRecord(file: string, record: object): void {
  mkdirSync(dirname(file), { recursive: true });
  appendFileSync(file, `${JSON.stringify(record)}\n`);
}
