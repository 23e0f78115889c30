/** The station's settings: read once from the environment, each with its bounds. `.env.example` documents them. */
import { availableParallelism, hostname } from 'node:os';

export interface StationConfig {
  readonly databaseUrl: string;
  readonly schema: string;
  /** Null: this station sends no letters. */
  readonly smtpUrl: string | null;
  readonly mailFrom: string;
  readonly publicUrl: string;
  readonly timeZone: string;
  readonly name: string;
  readonly workers: number;
  readonly leaseSeconds: number;
  readonly heartbeatSeconds: number;
  readonly sweepSeconds: number;
  readonly quantumSeconds: number;
  readonly checkpointSeconds: number;
  readonly quickCpuMs: number;
  readonly memoryBytes: number;
  readonly defaultAllowance: { readonly workers: number; readonly cpuSecondsPerDay: number };
  /** Folder for results that could not be written before the process had to end. */
  readonly spoolFolder: string;
}

export class ConfigFault extends Error {
  override readonly name = 'ConfigFault';
}

type Environment = Readonly<Record<string, string | undefined>>;

/** Numbers: name → default, low, high. Fractions are allowed where the unit is a second. */
const NUMBERS = {
  STATION_WORKERS: [availableParallelism(), 1, 1_024],
  LEASE_SECONDS: [30, 1, 3_600],
  HEARTBEAT_SECONDS: [5, 0.1, 600],
  SWEEP_SECONDS: [10, 0.1, 3_600],
  QUANTUM_SECONDS: [60, 0.1, 3_600],
  CHECKPOINT_SECONDS: [2, 0.05, 60],
  QUICK_CPU_MS: [2_000, 0, 600_000],
  MEMORY_MIB_PER_THREAD: [1_024, 1, 1_048_576],
  DEFAULT_WORKERS: [2, 0, 10_000],
  DEFAULT_CPU_HOURS_PER_DAY: [40, 0, 27_777],
} as const satisfies Record<string, readonly [fallback: number, low: number, high: number]>;

function numberOf(env: Environment, name: keyof typeof NUMBERS): number {
  const [fallback, low, high] = NUMBERS[name];
  const text = env[name];
  if (text === undefined || text === '') return fallback;
  const value = Number(text);
  if (!(value >= low && value <= high))
    throw new ConfigFault(`${name}: expected a number from ${low} to ${high}, found ${JSON.stringify(text)}`);
  return value;
}

/** @throws ConfigFault naming the setting, what was expected and what was found */
export function readConfig(env: Environment): StationConfig {
  const text = (name: string, fallback: string) => env[name] || fallback;
  if (!env.DATABASE_URL) throw new ConfigFault('DATABASE_URL: expected the address of the database, found nothing');
  const config = {
    databaseUrl: env.DATABASE_URL,
    schema: text('DATABASE_SCHEMA', 'palmette'),
    smtpUrl: env.SMTP_URL || null,
    mailFrom: text('MAIL_FROM', 'Palmette <palmette@localhost>'),
    publicUrl: text('PUBLIC_URL', `http://${text('HOST', '127.0.0.1')}:${text('PORT', '8080')}`).replace(/\/+$/, ''),
    timeZone: text('POOL_TIME_ZONE', 'UTC'),
    name: text('STATION_NAME', hostname()),
    workers: Math.floor(numberOf(env, 'STATION_WORKERS')),
    leaseSeconds: numberOf(env, 'LEASE_SECONDS'),
    heartbeatSeconds: numberOf(env, 'HEARTBEAT_SECONDS'),
    sweepSeconds: numberOf(env, 'SWEEP_SECONDS'),
    quantumSeconds: numberOf(env, 'QUANTUM_SECONDS'),
    checkpointSeconds: numberOf(env, 'CHECKPOINT_SECONDS'),
    quickCpuMs: numberOf(env, 'QUICK_CPU_MS'),
    memoryBytes: numberOf(env, 'MEMORY_MIB_PER_THREAD') * 1024 * 1024,
    defaultAllowance: {
      workers: Math.floor(numberOf(env, 'DEFAULT_WORKERS')),
      cpuSecondsPerDay: Math.floor(numberOf(env, 'DEFAULT_CPU_HOURS_PER_DAY') * 3_600),
    },
    spoolFolder: text('SPOOL_FOLDER', '.palmette/spool'),
  };
  if (config.heartbeatSeconds * 2 > config.leaseSeconds)
    throw new ConfigFault(
      `HEARTBEAT_SECONDS: expected at most half of LEASE_SECONDS (${config.leaseSeconds}), found ${config.heartbeatSeconds}`,
    );
  return config;
}
