/** Wiring: settings, schema, store, application, listening, and the way down. */
import { pino } from 'pino';
import { migrate, openStore, type StoreOptions } from '@palmette/store';
import { makeApp } from './app.ts';
import { ConfigFault, readConfig, type ServerConfig } from './config.ts';
import { listen } from './listen.ts';
import { openPasswords } from './passwords.ts';
import { SecretFault } from './secrets.ts';
import type { Services } from './services.ts';
import { openSourceCheck } from './source-check.ts';

const log = pino({ name: 'server', redact: ['req.headers.cookie', 'req.headers.authorization'] });

async function makeFirstAdmin(services: Services): Promise<void> {
  const { firstAdmin } = services.config;
  if (firstAdmin === null || (await services.store.people.listForAdmin()).length > 0) return;
  await services.store.people.create({
    email: firstAdmin.email,
    name: firstAdmin.name,
    role: 'admin',
    passwordHash: await services.passwords.hash(firstAdmin.password),
  });
  log.info({ email: firstAdmin.email }, 'first admin made');
}

async function main(config: ServerConfig): Promise<void> {
  const options: StoreOptions = {
    databaseUrl: config.databaseUrl,
    schema: config.schema,
    applicationName: 'palmette server',
    defaultAllowance: config.defaultAllowance,
    poolTimeZone: config.timeZone,
    onError: (error) => log.error({ err: error }, 'store'),
  };
  await migrate(options);
  let address = '';
  const services: Services = {
    config,
    store: await openStore(options),
    passwords: openPasswords(config.passwordKey),
    sources: openSourceCheck(),
    publicUrl: () => config.publicUrl ?? address,
  };
  await makeFirstAdmin(services);
  const { server, port } = await listen(makeApp(services, log), config.host, config.port);
  address = `http://${config.host}:${port}`;
  if (config.port !== 0 && port !== config.port)
    log.warn({ wanted: config.port, port }, 'the port is taken; using the next free one');
  log.info({ address }, 'listening');

  let stopping = false;
  const stop = async () => {
    if (stopping) return;
    stopping = true;
    server.close();
    server.closeIdleConnections();
    setTimeout(() => server.closeAllConnections(), 3_000).unref();
    await Promise.all([services.passwords.close(), services.sources.close()]);
    await services.store.close();
    log.info('stopped');
    process.exit(0);
  };
  process.once('SIGTERM', () => void stop());
  process.once('SIGINT', () => void stop());
}

try {
  await main(readConfig(process.env));
} catch (error) {
  if (error instanceof ConfigFault || error instanceof SecretFault) process.stderr.write(`${error.message}\n`);
  else log.fatal({ err: error }, 'could not start');
  process.exitCode = 1;
}
