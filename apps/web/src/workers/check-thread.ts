/** Runs the independent checker in the reader's browser. One check a worker: stopping it is ending the worker. */
import { check } from '@palmette/checker';

/** At most so many reports of progress a second reach the page. */
const REPORT_EVERY_MS = 100;

onmessage = ({ data }: MessageEvent<Uint8Array>) => {
  let reported = 0;
  const outcome = check(data, {
    progress: (share) => {
      if (performance.now() - reported < REPORT_EVERY_MS) return;
      reported = performance.now();
      postMessage({ kind: 'progress', share });
    },
  });
  postMessage({ kind: 'done', outcome });
};
