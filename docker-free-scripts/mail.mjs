/**
 * The local mail server: an SMTP server on loopback that keeps each letter as a file and says where. Nothing leaves
 * the machine. Settings: MAIL_PORT (0 or empty: a free one), MAIL_FOLDER.
 */
import { mkdirSync, renameSync, writeFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';

const HOST = '127.0.0.1';
const LETTER_BYTES = 10 * 1024 * 1024;

/** Sorts by arrival: time to the millisecond, a number within the process, then who it is for. */
function fileName(no, recipient) {
  const at = new Date().toISOString().replaceAll(':', '-');
  return `${at}-${String(no).padStart(4, '0')}-${recipient.replaceAll(/[^A-Za-z0-9@._-]/g, '_')}.eml`;
}

async function wholeOf(stream) {
  const parts = [];
  for await (const part of stream) parts.push(part);
  if (stream.sizeExceeded) throw Object.assign(new Error('the letter is too long'), { responseCode: 552 });
  return Buffer.concat(parts);
}

/**
 * Starts the server.
 * @param {{ port?: number, folder: string, say?: (line: string) => void }} options
 * @returns {Promise<{ port: number, stop: () => Promise<void> }>}
 */
export async function startMail({ port = 0, folder, say = () => {} }) {
  mkdirSync(folder, { recursive: true });
  let no = 0;

  /** First under another name, so that a reader of the folder never sees half a letter. */
  async function keep(raw, recipients) {
    no += 1;
    const file = join(folder, fileName(no, recipients[0] ?? 'nobody'));
    writeFileSync(`${file}.part`, raw);
    renameSync(`${file}.part`, file);
    const { subject } = await simpleParser(raw);
    say(`Letter to ${recipients.join(', ')}: ${subject ?? '(no subject)'}\n  ${file}`);
  }

  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS'],
    hideENHANCEDSTATUSCODES: true,
    disableReverseLookup: true,
    size: LETTER_BYTES,
    onAuth: (auth, _session, answer) => answer(null, { user: auth.username ?? 'anyone' }),
    onData(stream, session, answer) {
      wholeOf(stream)
        .then((raw) =>
          keep(
            raw,
            session.envelope.rcptTo.map((to) => to.address),
          ),
        )
        .then(
          () => answer(null, 'kept'),
          (error) => answer(error),
        );
    },
  });
  await new Promise((done, failed) => {
    server.once('error', failed);
    server.listen(port, HOST, done);
  });
  // a client that hangs up in the middle is its own affair
  server.on('error', (error) => say(`A connection ended badly: ${error.message}`));
  return {
    port: server.server.address().port,
    stop: () => new Promise((done) => server.close(done)),
  };
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const folder = resolve(process.env.MAIL_FOLDER || '.palmette/letters');
  const say = (line) => process.stdout.write(`${line}\n`);
  try {
    const mail = await startMail({ port: Number(process.env.MAIL_PORT || 0), folder, say });
    say(`Mail at smtp://${HOST}:${mail.port}; letters are kept in ${folder}`);
    for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'])
      process.once(signal, () => void mail.stop().then(() => process.exit(0)));
  } catch (error) {
    process.stderr.write(
      error.code === 'EADDRINUSE'
        ? `MAIL_PORT ${process.env.MAIL_PORT} is taken; leave it empty for a free one.\n`
        : `The local mail server could not start: ${error.message}\n`,
    );
    process.exit(1);
  }
}
