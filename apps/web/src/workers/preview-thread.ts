/**
 * Reads what is typed, off the main thread and without the server: lattice, invariants, arithmetic, a quick look. One
 * order at a time; the page ends the worker when it has a newer one.
 */
import { buildLattice, discriminantGroup, SourceFault } from '@palmette/lattice';
import { groundsOf } from './preview-grounds.ts';
import type { PreviewOrder, PreviewReport } from './preview-messages.ts';
import { arithmeticReading, quickLook } from './preview-quick.ts';
import { readingOf } from './preview-reading.ts';

const say = (report: PreviewReport) => postMessage(report);

onmessage = ({ data }: MessageEvent<PreviewOrder>) => {
  try {
    const lattice = buildLattice(data.source);
    say({ kind: 'read', reading: readingOf(data.source, lattice) });
    const grounds = groundsOf(lattice);
    const arithmetic = arithmeticReading(lattice, data.target, grounds);
    say({ kind: 'arithmetic', arithmetic });
    say({ kind: 'group', divisors: discriminantGroup(lattice).map(String) });
    if (!arithmetic.settled) say({ kind: 'quick', quick: quickLook(lattice, data, () => performance.now(), grounds) });
  } catch (error) {
    say({
      kind: 'fault',
      fault: {
        path: error instanceof SourceFault ? error.path : '',
        message: error instanceof Error ? error.message : String(error),
      },
    });
  }
  say({ kind: 'end' });
};
