/** Runs the command line from a bundle that is rebuilt when its sources change. Start-up is two stats and a hash. */
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, renameSync, rmSync, statSync } from 'node:fs';
import { execFileSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { join } from 'node:path';

const root = fileURLToPath(new URL('..', import.meta.url));
const SOURCES = [
  'packages/exact',
  'packages/lattice',
  'packages/search',
  'packages/certificate',
  'packages/checker',
  'packages/contracts',
  'packages/threads',
  'apps/cli',
];

/** Names, sizes and times of all sources: changes whenever one of them does. */
function sourcesHash() {
  const hash = createHash('sha256');
  const visit = (folder) => {
    for (const entry of readdirSync(folder, { withFileTypes: true })) {
      const path = join(folder, entry.name);
      if (entry.isDirectory()) visit(path);
      else if (!entry.name.endsWith('.test.ts')) {
        const { size, mtimeMs } = statSync(path);
        hash.update(`${path}:${size}:${mtimeMs}\n`);
      }
    }
  };
  for (const source of SOURCES) visit(join(root, source, 'src'));
  return hash.digest('hex').slice(0, 16);
}

function ensurePackages() {
  if (existsSync(join(root, 'node_modules/esbuild'))) return;
  execFileSync('npm', ['ci', '--silent'], { cwd: root, stdio: ['ignore', 'ignore', 'inherit'] });
}

async function bundle() {
  ensurePackages();
  const folder = join(root, '.palmette/cli');
  const target = join(folder, sourcesHash());
  if (existsSync(join(target, 'palmette.js'))) return target;
  const { buildCli } = await import('./build.mjs');
  const draft = `${target}.${process.pid}`;
  mkdirSync(draft, { recursive: true });
  await buildCli(draft);
  try {
    renameSync(draft, target);
  } catch {
    rmSync(draft, { recursive: true, force: true }); // another process was faster with the same bundle
  }
  for (const old of readdirSync(folder))
    if (join(folder, old) !== target && !old.includes('.')) rmSync(join(folder, old), { recursive: true, force: true });
  return target;
}

await import(join(await bundle(), 'palmette.js'));
