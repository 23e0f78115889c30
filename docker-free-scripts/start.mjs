/** The running product on one machine: database, mail, server, station, demo; stops in the opposite order. */
import { execFileSync, spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, readdirSync, statSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('..', import.meta.url));
const state = join(root, '.palmette');
if (existsSync(join(root, '.env'))) process.loadEnvFile(join(root, '.env'));

const children = [];
let stopping = false;

function say(line) {
  process.stdout.write(`${line}\n`);
}

/** The first free port from `wanted` on. */
async function freePort(wanted, host) {
  for (let port = wanted; port < wanted + 100; port += 1) {
    const free = await new Promise((resolve) => {
      const probe = createServer();
      probe.once('error', () => resolve(false));
      probe.listen(port, host, () => probe.close(() => resolve(true)));
    });
    if (free) return port;
  }
  throw new Error(`no free port between ${wanted} and ${wanted + 99}`);
}

function run(name, file, env, onLine = () => {}) {
  const child = spawn(process.execPath, ['--enable-source-maps', file], {
    cwd: root,
    env: { ...process.env, ...env },
    stdio: ['ignore', 'pipe', 'inherit'],
    detached: true,
  });
  child.stdout.setEncoding('utf8');
  child.stdout.on('data', (text) => text.split('\n').filter(Boolean).forEach(onLine));
  const ended = new Promise((resolve) => child.once('exit', resolve));
  children.push({ name, child, ended });
  child.once('exit', (code, signal) => {
    if (stopping) return;
    say(`${name} ended by itself (${signal ?? `exit ${code}`}); stopping.`);
    void stop(1);
  });
  return child;
}

async function stop(code) {
  if (stopping) return;
  stopping = true;
  for (const { child, ended } of [...children].reverse()) {
    child.kill('SIGTERM');
    const patience = setTimeout(() => child.kill('SIGKILL'), 15_000);
    await ended;
    clearTimeout(patience);
  }
  if (ownDatabase)
    execFileSync('bash', ['docker-free-scripts/postgres.sh', 'stop', join(state, 'postgres')], {
      cwd: root,
      stdio: 'ignore',
    });
  say('Stopped.');
  process.exit(code);
}
process.on('SIGINT', () => void stop(0));
process.on('SIGTERM', () => void stop(0));
process.on('SIGHUP', () => void stop(0));

/** Names, sizes and times of everything that goes into the build. */
function sourcesHash() {
  const hash = createHash('sha256');
  const visit = (folder) => {
    for (const entry of readdirSync(folder, { withFileTypes: true })) {
      if (entry.name === 'node_modules' || entry.name === 'dist') continue;
      const path = join(folder, entry.name);
      if (entry.isDirectory()) visit(path);
      else {
        const { size, mtimeMs } = statSync(path);
        hash.update(`${path}:${size}:${mtimeMs}\n`);
      }
    }
  };
  for (const folder of ['apps', 'packages']) visit(join(root, folder));
  hash.update(readFileSync(join(root, 'package-lock.json')));
  return hash.digest('hex');
}

function build() {
  const mark = join(state, 'built');
  const hash = sourcesHash();
  if (existsSync(mark) && readFileSync(mark, 'utf8') === hash) return;
  say('Building');
  execFileSync(process.execPath, ['docker-free-scripts/build.mjs'], { cwd: root, stdio: 'inherit' });
  writeFileSync(mark, hash);
}

async function healthy(url, wanted) {
  for (const deadline = Date.now() + 60_000; Date.now() < deadline && !stopping;) {
    const answer = await fetch(`${url}/api/health`).then(
      (r) => r.json(),
      () => null,
    );
    if (answer !== null && wanted(answer)) return;
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
  if (!stopping) throw new Error('the server did not become healthy within a minute');
}

mkdirSync(state, { recursive: true });
const ownDatabase = !process.env.DATABASE_URL;
try {
  build();
  const databaseUrl =
    process.env.DATABASE_URL ||
    execFileSync('bash', ['docker-free-scripts/postgres.sh', 'start', join(state, 'postgres')], {
      cwd: root,
      encoding: 'utf8',
    }).trim();
  const host = process.env.HOST || '127.0.0.1';
  const wanted = Number(process.env.PORT || 8080);
  const port = await freePort(wanted, host);
  if (port !== wanted) say(`Port ${wanted} is taken; using ${port}.`);
  const url = process.env.PUBLIC_URL || `http://${host}:${port}`;
  const letters = join(state, 'letters');
  let smtpUrl = process.env.SMTP_URL;
  if (!smtpUrl) {
    const mailPort = await freePort(2525, '127.0.0.1');
    run('mail', 'docker-free-scripts/mail.mjs', { MAIL_PORT: String(mailPort), MAIL_FOLDER: letters });
    smtpUrl = `smtp://127.0.0.1:${mailPort}`;
  }
  const env = { DATABASE_URL: databaseUrl, HOST: host, PORT: String(port), PUBLIC_URL: url, SMTP_URL: smtpUrl };
  const demo = {
    FIRST_ADMIN_EMAIL: process.env.FIRST_ADMIN_EMAIL || 'ines@saltmarsh.example',
    FIRST_ADMIN_NAME: process.env.FIRST_ADMIN_NAME || 'Ines Okafor',
    FIRST_ADMIN_PASSWORD: process.env.FIRST_ADMIN_PASSWORD || 'palmette-demo',
  };
  run('server', 'apps/server/dist/main.js', { ...env, ...demo }, process.env.PALMETTE_LOGS ? say : undefined);
  await healthy(url, (h) => h.database && h.queue);
  run('station', 'apps/station/dist/main.js', env, process.env.PALMETTE_LOGS ? say : undefined);
  await healthy(url, (h) => h.stationHeardAt !== null);
  if (process.env.PALMETTE_DEMO !== '0' && !process.env.FIRST_ADMIN_EMAIL && !process.env.SMTP_URL) {
    const { makeDemo } = await import('./demo.mjs');
    await makeDemo({
      url,
      letters,
      state,
      admin: { email: demo.FIRST_ADMIN_EMAIL, password: demo.FIRST_ADMIN_PASSWORD },
      say,
    });
  }
  say('');
  say(`Palmette runs at ${url}`);
  if (!process.env.SMTP_URL) say(`Letters are kept as files in ${letters}`);
  say('Ctrl-C stops all of it.');
} catch (error) {
  if (!stopping) {
    say(`Could not start: ${error.message}`);
    await stop(1);
  }
}
