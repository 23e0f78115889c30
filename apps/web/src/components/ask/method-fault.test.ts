import { describe, expect, it } from 'vitest';
import { methodFault } from './method-fault.ts';

describe('a forced method', () => {
  it('of rows or columns, or none, is not refused here', () => {
    for (const method of ['', 'rows', 'columns'] as const) {
      expect(methodFault(method, { any: true }, 3)).toBe('');
      expect(methodFault(method, { dimension: 99 }, 3)).toBe('');
    }
  });

  it('of frames is refused above the rank + 2', () => {
    expect(methodFault('frames', { excess: 2 }, null)).toBe('');
    expect(methodFault('frames', { excess: 3 }, null)).toContain('found the rank + 3');
    expect(methodFault('frames', { dimension: 5 }, 3)).toBe('');
    expect(methodFault('frames', { dimension: 6 }, 3)).toContain('found 6 at rank 3');
    expect(methodFault('frames', { dimension: 6 }, null)).toBe('');
    expect(methodFault('frames', { any: true }, 3)).toContain('found any n');
    expect(methodFault('frames', { least: {} }, 3)).toBe('');
    expect(methodFault('frames', null, 3)).toBe('');
  });
});
