import { beforeEach, describe, expect, it } from 'vitest';
import { Poller, type Round } from './poller.ts';

/** A clock that stands still until it is told to ring. */
class Clock {
  timers: { run: () => void; ms: number }[] = [];
  shown = true;
  setTimer(run: () => void, ms: number) {
    const timer = { run, ms };
    this.timers.push(timer);
    return timer;
  }
  clearTimer(timer: unknown) {
    this.timers = this.timers.filter((t) => t !== timer);
  }
  visible() {
    return this.shown;
  }
  ring(): number {
    const timer = this.timers.shift()!;
    timer.run();
    return timer.ms;
  }
}

/** Lets the promises of one round run to their end. */
const settled = async () => {
  for (let i = 0; i < 10; i += 1) await Promise.resolve();
};

let clock: Clock;
let rounds: number;
let answer: Round;
let poller: Poller;
beforeEach(() => {
  clock = new Clock();
  rounds = 0;
  answer = 'changed';
  poller = new Poller(
    async () => {
      rounds += 1;
      return answer;
    },
    { fastest: 2_000, slowest: 15_000 },
    clock,
  );
});

describe('the poller', () => {
  it('reads at once, then after the shortest wait while things change', async () => {
    poller.now();
    await settled();
    expect(rounds).toBe(1);
    expect(clock.ring()).toBe(2_000);
    await settled();
    expect(clock.ring()).toBe(2_000);
  });

  it('slows down to the longest wait while nothing changes, and is quick again after a change', async () => {
    answer = 'same';
    poller.now();
    const waits: number[] = [];
    for (let i = 0; i < 7; i += 1) {
      await settled();
      waits.push(clock.ring());
    }
    expect(waits).toEqual([3_000, 4_500, 6_750, 10_125, 15_000, 15_000, 15_000]);
    answer = 'changed';
    await settled();
    clock.ring();
    await settled();
    expect(clock.ring()).toBe(2_000);
  });

  it('backs off further while the server is away', async () => {
    answer = 'failed';
    poller.now();
    const waits: number[] = [];
    for (let i = 0; i < 6; i += 1) {
      await settled();
      waits.push(clock.ring());
    }
    expect(waits).toEqual([4_000, 8_000, 16_000, 32_000, 60_000, 60_000]);
  });

  it('rests while the page is hidden and reads at once when it is seen again', async () => {
    poller.now();
    await settled();
    clock.shown = false;
    poller.visibilityChanged();
    expect(clock.timers).toEqual([]);
    clock.shown = true;
    poller.visibilityChanged();
    await settled();
    expect(rounds).toBe(2);
    expect(clock.timers).toHaveLength(1);
  });

  it('ends when a round says so, and begins again when asked', async () => {
    answer = 'stop';
    poller.now();
    await settled();
    expect(clock.timers).toEqual([]);
    poller.visibilityChanged();
    expect(rounds).toBe(1);
    poller.now();
    await settled();
    expect(rounds).toBe(2);
  });

  it('gives up a round under way when it is asked to read at once', async () => {
    const signals: AbortSignal[] = [];
    const slow = new Poller(
      (signal) => {
        signals.push(signal);
        return new Promise(() => undefined);
      },
      { fastest: 1, slowest: 1 },
      clock,
    );
    slow.now();
    slow.now();
    expect(signals.map((s) => s.aborted)).toEqual([true, false]);
    slow.stop();
    expect(signals[1]!.aborted).toBe(true);
  });
});
