/** Who may import whom: the table of the architecture as a test, and the shape of the tree. */
import { execFileSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { dirname, join, relative, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

const root = fileURLToPath(new URL('../..', import.meta.url));

interface Rule {
  /** Our workspaces that may be imported. */
  readonly ours: readonly string[];
  /** Workspaces of which only types may be imported. */
  readonly typesOnly?: readonly string[];
  /** `node:*` anywhere in the workspace's sources. */
  readonly node: boolean;
  /** Packages that must not be imported; `*` is every package of the registry. */
  readonly never?: readonly string[];
}

const RULES: Readonly<Record<string, Rule>> = {
  'packages/exact': { ours: [], node: false },
  'packages/lattice': { ours: ['exact'], node: false },
  'packages/search': { ours: ['exact', 'certificate'], typesOnly: ['lattice'], node: false },
  'packages/certificate': { ours: [], node: false },
  'packages/checker': { ours: [], typesOnly: ['certificate'], node: false, never: ['*'] },
  'packages/contracts': { ours: [], node: false, never: ['typeorm', 'express', 'vue'] },
  'packages/store': { ours: ['contracts'], node: true, never: ['express'] },
  'packages/threads': {
    ours: ['contracts', 'lattice', 'search', 'certificate', 'checker'],
    node: true,
    never: ['express', 'typeorm', 'pg', 'pg-boss'],
  },
  'packages/wording': { ours: ['contracts'], node: false },
  'packages/drawing': { ours: [], node: false },
  'apps/server': {
    ours: ['contracts', 'store', 'lattice', 'checker', 'wording'],
    node: true,
    never: ['pg-boss', 'typeorm'],
  },
  'apps/station': {
    ours: ['contracts', 'store', 'lattice', 'search', 'certificate', 'checker', 'threads', 'wording'],
    node: true,
    never: ['express', 'pg-boss', 'typeorm'],
  },
  'apps/web': { ours: ['contracts', 'lattice', 'checker', 'search', 'wording', 'drawing'], node: false },
  'apps/cli': { ours: ['contracts', 'lattice', 'search', 'certificate', 'checker', 'threads'], node: true },
};

interface Import {
  readonly file: string;
  readonly what: string;
  readonly typeOnly: boolean;
}

const tracked = execFileSync('git', ['ls-files', '-co', '--exclude-standard'], { cwd: root, encoding: 'utf8' })
  .split('\n')
  .filter((f) => f !== '' && existsSync(join(root, f)));
const IMPORT =
  /(?:^|\n)\s*(?:import|export)\s+(type\s+)?([^'";]*?)\s*from\s*['"]([^'"]+)['"]|(?:^|\n)\s*import\s*['"]([^'"]+)['"]|\bimport\(\s*['"]([^'"]+)['"]/g;

function importsOf(folder: string, tests: boolean): Import[] {
  const files = tracked.filter(
    (f) => f.startsWith(`${folder}/src/`) && /\.(ts|vue)$/.test(f) && f.includes('.test.') === tests,
  );
  return files.flatMap((file) =>
    [...readFileSync(join(root, file), 'utf8').matchAll(IMPORT)].map((m) => ({
      file,
      what: m[3] ?? m[4] ?? m[5]!,
      typeOnly: m[1] !== undefined || (m[2] !== undefined && /^\{\s*(type\s+\w+(\s+as\s+\w+)?\s*,?\s*)+\}$/.test(m[2])),
    })),
  );
}

describe.each(Object.entries(RULES))('%s', (folder, rule) => {
  const imports = importsOf(folder, false);

  it('imports only what it may', () => {
    const faults = imports.filter(({ file, what, typeOnly }) => {
      if (what.startsWith('.')) return !resolve(root, dirname(file), what).startsWith(join(root, folder, '/'));
      if (what.startsWith('node:')) return !rule.node;
      if (what.startsWith('@palmette/')) {
        const name = what.slice('@palmette/'.length);
        return !(rule.ours.includes(name) || (typeOnly && rule.typesOnly?.includes(name)));
      }
      return (
        rule.never?.includes('*') === true || rule.never?.some((p) => what === p || what.startsWith(`${p}/`)) === true
      );
    });
    expect(faults).toEqual([]);
  });
});

describe('the checker stands alone', () => {
  it('even in its own tests it imports nothing of ours', () => {
    expect(
      importsOf('packages/checker', true).filter(
        (i) => i.what.startsWith('@palmette/') && i.what !== '@palmette/certificate',
      ),
    ).toEqual([]);
  });
});

describe('pure packages', () => {
  it.each([
    'packages/exact',
    'packages/lattice',
    'packages/search',
    'packages/checker',
    'packages/drawing',
    'packages/wording',
  ])('%s has no clock and no randomness of its own', (folder) => {
    const files = tracked.filter((f) => f.startsWith(`${folder}/src/`) && f.endsWith('.ts') && !f.includes('.test.'));
    const faults = files.filter((f) =>
      /\bDate\.now\b|\bnew Date\(\)|\bMath\.random\b|\bperformance\.now\b/.test(readFileSync(join(root, f), 'utf8')),
    );
    expect(faults).toEqual([]);
  });
});

describe('the tree', () => {
  it('has the agreed top level', () => {
    const allowed = [
      'README.md',
      'DEVELOPERS.md',
      'package.json',
      'package-lock.json',
      'LICENSE',
      'apps',
      'packages',
      'tests',
      'docker-free-scripts',
      'tsconfig.base.json',
    ];
    const top = new Set(tracked.map((f) => f.split('/')[0]!).filter((f) => !f.startsWith('.')));
    expect([...top].filter((name) => !allowed.includes(name))).toEqual([]);
  });

  it('has no import cycles between workspaces', () => {
    const edges = new Map(
      Object.keys(RULES).map((folder) => [
        folder.split('/')[1]!,
        new Set(
          importsOf(folder, false)
            .filter((i) => i.what.startsWith('@palmette/') && !i.typeOnly)
            .map((i) => i.what.slice(10)),
        ),
      ]),
    );
    const done = new Set<string>();
    const visit = (name: string, path: readonly string[]): void => {
      if (path.includes(name)) throw new Error(`cycle: ${[...path, name].join(' → ')}`);
      if (done.has(name)) return;
      for (const next of edges.get(name) ?? []) visit(next, [...path, name]);
      done.add(name);
    };
    for (const name of edges.keys()) visit(name, []);
    expect(done.size).toBe(edges.size);
  });

  it('has a lock file without addresses and no file without one idea', () => {
    expect(readFileSync(join(root, 'package-lock.json'), 'utf8')).not.toMatch(/"resolved": "http/);
    const long = tracked
      .filter((f) => /^(apps|packages|tests)\/.*\.(ts|vue|css)$/.test(f))
      .map((f) => ({ file: relative('.', f), lines: readFileSync(join(root, f), 'utf8').split('\n').length }))
      .filter((f) => f.lines > 450);
    expect(long).toEqual([]);
  });

  it('has no generic file names', () => {
    expect(tracked.filter((f) => /\/(utils|common|helpers|misc)\.(ts|js|mjs|vue)$/.test(f))).toEqual([]);
  });

  it('names no machine, and leaves nothing for later', () => {
    const words = new RegExp(['TO' + 'DO', 'FIX' + 'ME', 'X' + 'XX'].map((w) => `\\b${w}\\b`).join('|'));
    const faults = tracked.filter(
      (f) =>
        /^(apps|packages|tests|docker-free-scripts)\//.test(f) &&
        /\.(ts|vue|mjs|sh|css|md|py)$/.test(f) &&
        words.test(readFileSync(join(root, f), 'utf8')),
    );
    expect(faults).toEqual([]);
  });

  it('skips and focuses no test', () => {
    const faults = tracked.filter(
      (f) =>
        f.endsWith('.test.ts') && /\b(it|test|describe)\.(skip|only|todo)\b/.test(readFileSync(join(root, f), 'utf8')),
    );
    expect(faults).toEqual([]);
  });
});
