import { describe, expect, it } from 'vitest';
import { ConfigFault, readConfig } from './config.ts';

const DATABASE_URL = 'postgres://127.0.0.1/x';

describe('settings', () => {
  it('has a value for everything but the database', () => {
    const config = readConfig({ DATABASE_URL });
    expect(config).toMatchObject({ schema: 'palmette', leaseSeconds: 30, heartbeatSeconds: 5, quickCpuMs: 2000 });
    expect(config.workers).toBeGreaterThan(0);
    expect(config.smtpUrl).toBeNull();
  });

  it('takes an empty text for not set, and a slash off the address in letters', () => {
    const config = readConfig({ DATABASE_URL, STATION_WORKERS: '', PUBLIC_URL: 'https://a.example/' });
    expect(config.publicUrl).toBe('https://a.example');
  });

  it.each([
    [{}, /^DATABASE_URL: expected/],
    [{ DATABASE_URL, STATION_WORKERS: 'many' }, /^STATION_WORKERS: expected a number from 1 to 1024, found "many"/],
    [{ DATABASE_URL, LEASE_SECONDS: '-1' }, /^LEASE_SECONDS/],
    [{ DATABASE_URL, LEASE_SECONDS: '3', HEARTBEAT_SECONDS: '2' }, /^HEARTBEAT_SECONDS: expected at most half/],
  ])('refuses %j', (env, message) => {
    expect(() => readConfig(env)).toThrow(ConfigFault);
    expect(() => readConfig(env)).toThrow(message);
  });
});
