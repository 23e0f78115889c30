/** A worker thread does not inherit the loader for TypeScript: this file sets it up and loads the toy. */
import { register } from 'tsx/esm/api';

register();
await import('./toy-thread.ts');
