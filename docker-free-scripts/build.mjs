/** Bundles the Node programs (server, station, their threads, the command line) and builds the client. */
import { build } from 'esbuild';
import { execFileSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('..', import.meta.url));

const shared = {
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  conditions: ['source'],
  sourcemap: 'linked',
  logLevel: 'warning',
  absWorkingDir: root,
  tsconfigRaw: { compilerOptions: { experimentalDecorators: true, useDefineForClassFields: false } },
};

/** Our own workspaces are bundled; packages of the registry stay outside. */
const outside = {
  name: 'registry packages stay outside',
  setup: (bundler) =>
    bundler.onResolve({ filter: /^[^./]/ }, ({ path, kind }) =>
      kind === 'entry-point' || path.startsWith('@palmette/') ? undefined : { path, external: true },
    ),
};

/** The command line takes its packages in, so that it starts fast. */
export async function buildCli(outdir) {
  await build({
    ...shared,
    entryPoints: { palmette: 'apps/cli/src/main.ts', thread: 'packages/threads/src/thread.ts' },
    outdir,
    banner: {
      js: "import { createRequire as __createRequire } from 'node:module'; const require = __createRequire(import.meta.url);",
    },
    external: ['piscina'],
  });
}

async function buildPrograms() {
  const serverThreads = readdirSync(join(root, 'apps/server/src/threads')).filter((file) => !file.endsWith('.test.ts'));
  const server = {
    main: 'apps/server/src/main.ts',
    ...Object.fromEntries(serverThreads.map((file) => [file.replace('.ts', ''), `apps/server/src/threads/${file}`])),
  };
  const station = { main: 'apps/station/src/main.ts', thread: 'packages/threads/src/thread.ts' };
  for (const [app, entryPoints] of Object.entries({ server, station })) {
    await build({ ...shared, entryPoints, outdir: `apps/${app}/dist`, plugins: [outside] });
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  await buildPrograms();
  if (!process.argv.includes('--no-client'))
    execFileSync('npx', ['vite', 'build', 'apps/web', '--logLevel', 'warn'], { cwd: root, stdio: 'inherit' });
}
