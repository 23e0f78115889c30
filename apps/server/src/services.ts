/** What every feature needs: handed in once by `main.ts`. */
import type { Store } from '@palmette/store';
import type { ServerConfig } from './config.ts';
import type { Passwords } from './passwords.ts';
import type { SourceCheck } from './source-check.ts';

export interface Services {
  readonly config: ServerConfig;
  readonly store: Store;
  readonly passwords: Passwords;
  readonly sources: SourceCheck;
  /** Address that letters and links carry; known once the server listens. */
  readonly publicUrl: () => string;
}
