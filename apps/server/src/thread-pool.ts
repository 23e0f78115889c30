/** A small piscina pool for one thread file of `threads/`: the bundle beside the program, or the source in development. */
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { Piscina } from 'piscina';

export function openThreadPool(
  name: 'password' | 'read-lattice',
  options: { readonly maxThreads: number; readonly maxQueue: number },
): Piscina {
  const bundled = fileURLToPath(new URL(`./${name}.js`, import.meta.url));
  const isBuilt = existsSync(bundled);
  return new Piscina({
    filename: isBuilt ? bundled : fileURLToPath(new URL(`./threads/${name}.ts`, import.meta.url)),
    execArgv: isBuilt ? [] : ['--conditions=source', '--import', 'tsx'],
    minThreads: 0,
    idleTimeout: 30_000,
    ...options,
  });
}
