/** The server's settings: read once from the environment. `.env.example` documents them. */
import { isAbsolute, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { readSecret } from './secrets.ts';

export interface ServerConfig {
  readonly host: string;
  readonly port: number;
  /** Null: the address that the server listens on. */
  readonly publicUrl: string | null;
  readonly databaseUrl: string;
  readonly schema: string;
  readonly sessionSecret: string;
  readonly passwordKey: string;
  readonly secureCookie: boolean;
  readonly timeZone: string;
  readonly defaultAllowance: { readonly workers: number; readonly cpuSecondsPerDay: number };
  /** Made if there is nobody yet. */
  readonly firstAdmin: { readonly email: string; readonly name: string; readonly password: string } | null;
  readonly webFolder: string;
}

export class ConfigFault extends Error {
  override readonly name = 'ConfigFault';
}

type Environment = Readonly<Record<string, string | undefined>>;

function numberOf(env: Environment, name: string, fallback: number, low: number, high: number): number {
  const text = env[name];
  if (text === undefined || text === '') return fallback;
  const value = Number(text);
  if (!(value >= low && value <= high))
    throw new ConfigFault(`${name}: expected a number from ${low} to ${high}, found ${JSON.stringify(text)}`);
  return value;
}

/** @throws ConfigFault naming the setting, what was expected and what was found */
export function readConfig(env: Environment): ServerConfig {
  if (!env['DATABASE_URL']) throw new ConfigFault('DATABASE_URL: expected the address of the database, found nothing');
  const state = env['PALMETTE_STATE'] || '.palmette';
  const stateFolder = isAbsolute(state) ? state : resolve(state);
  const { FIRST_ADMIN_EMAIL: email, FIRST_ADMIN_NAME: name, FIRST_ADMIN_PASSWORD: password } = env;
  return {
    host: env['HOST'] || '127.0.0.1',
    port: numberOf(env, 'PORT', 8080, 0, 65_535),
    publicUrl: env['PUBLIC_URL'] || null,
    databaseUrl: env['DATABASE_URL'],
    schema: env['DATABASE_SCHEMA'] || 'palmette',
    sessionSecret: readSecret(env, 'SESSION_SECRET', stateFolder),
    passwordKey: readSecret(env, 'PASSWORD_KEY', stateFolder),
    secureCookie: env['COOKIE_SECURE'] === '1',
    timeZone: env['POOL_TIME_ZONE'] || 'UTC',
    defaultAllowance: {
      workers: numberOf(env, 'DEFAULT_WORKERS', 2, 0, 10_000),
      cpuSecondsPerDay: Math.round(numberOf(env, 'DEFAULT_CPU_HOURS_PER_DAY', 40, 0, 27_777) * 3600),
    },
    firstAdmin: email && password ? { email, name: name || 'Admin', password } : null,
    webFolder: fileURLToPath(new URL('../../web/dist', import.meta.url)),
  };
}
