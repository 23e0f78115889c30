import { describe, expect, it } from 'vitest';
import { readAllowance } from './read-allowance.ts';

describe('an allowance as typed', () => {
  it('is read in workers and hours', () => {
    expect(readAllowance(' 1 ', '40').allowance).toEqual({ workers: 1, cpuSecondsPerDay: 144_000 });
    expect(readAllowance('0', '0.5').allowance).toEqual({ workers: 0, cpuSecondsPerDay: 1_800 });
  });

  it.each([
    ['-1', '40', 'workers'],
    ['1.5', '40', 'workers'],
    ['10001', '40', 'workers'],
    ['two', '40', 'workers'],
    ['2', '', 'hours'],
    ['2', '4 h', 'hours'],
    ['2', '99999', 'hours'],
  ] as const)('%j workers and %j hours are refused with what was found', (workers, hours, field) => {
    const read = readAllowance(workers, hours);
    expect(read.allowance).toBeNull();
    expect(read.faults[field]).toContain(`found “${field === 'workers' ? workers : hours}”`);
  });
});
