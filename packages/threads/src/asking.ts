/**
 * How a thread gets the pieces of a long list, and gives its own away: it says what it needs and sleeps until the reply is
 * there. One piece is on its way at a time, so neither side ever holds a list, and a slow reader slows the writer down.
 */
import { receiveMessageOnPort, type MessagePort } from 'node:worker_threads';
import type { KeepMessage, NeedMessage } from './jobs.ts';

/** The reply to a `need`: the piece, or null after the last; to a `keep`: null. */
export interface Reply {
  readonly piece: Uint8Array | null;
}

export type Ask = (message: NeedMessage | KeepMessage) => Uint8Array | null;

/** Word in which the replies are counted. */
const REPLIES = 2;

/** In the thread. */
export function askOver(port: MessagePort, words: Int32Array): Ask {
  return (message) => {
    const before = Atomics.load(words, REPLIES);
    port.postMessage(message);
    Atomics.wait(words, REPLIES, before);
    return (receiveMessageOnPort(port)!.message as Reply).piece;
  };
}

/** In the process. */
export function reply(port: MessagePort, words: Int32Array, piece: Uint8Array | null): void {
  port.postMessage({ piece } satisfies Reply);
  Atomics.add(words, REPLIES, 1);
  Atomics.notify(words, REPLIES);
}

/** All pieces of a list, from the first; each time it is walked through they are asked for anew. */
export function pieces(of: NeedMessage['of'], ask: Ask): Iterable<Uint8Array> {
  return {
    *[Symbol.iterator]() {
      for (let no = 0; ; no += 1) {
        const piece = ask({ kind: 'need', of, no });
        if (piece === null) return;
        yield piece;
      }
    },
  };
}
