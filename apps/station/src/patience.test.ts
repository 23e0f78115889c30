import { describe, expect, it } from 'vitest';
import { isOutage, Patience } from './patience.ts';

const quiet = { info: () => {}, warn: () => {}, error: () => {} };
const coded = (code: string, message = '') => Object.assign(new Error(message), { code });

describe('an outage', () => {
  it.each([
    coded('ECONNREFUSED'),
    coded('57P01'),
    coded('57P03', 'the database system is starting up'),
    coded('08006'),
    new Error('Connection terminated unexpectedly'),
    new Error('Query runner already released. Cannot run queries anymore.'),
    coded('25P03', 'terminating connection due to idle-in-transaction timeout'),
    Object.assign(new Error('query failed'), { driverError: coded('57P01') }),
    new Error('wrapped', { cause: coded('ECONNRESET') }),
    new AggregateError([coded('ECONNREFUSED'), coded('ECONNREFUSED')]),
  ])('is seen in %s', (error) => expect(isOutage(error)).toBe(true));

  it.each([coded('23505', 'duplicate key'), coded('42P01'), new Error('rejected'), null, 'text'])(
    'is not seen in %s',
    (error) => expect(isOutage(error)).toBe(false),
  );
});

describe('patience', () => {
  it('repeats through outages and passes every other error on', async () => {
    const answers: (() => number)[] = [
      () => {
        throw coded('57P01');
      },
      () => 5,
    ];
    const patience = new Patience(quiet, 1);
    expect(await patience.untilAnswered('x', async () => answers.shift()!())).toBe(5);
    expect(patience.lastOutageAt).not.toBeNull();
    await expect(patience.untilAnswered('x', () => Promise.reject(coded('23505', 'double')))).rejects.toThrow('double');
  });

  it('stops waiting when it is given up', async () => {
    const patience = new Patience(quiet, 60_000);
    const waiting = patience.untilAnswered('x', () => Promise.reject(coded('57P01', 'gone')));
    const refused = expect(waiting).rejects.toThrow('gone');
    await Promise.resolve();
    await Promise.resolve();
    patience.giveUp();
    await refused;
  });
});
