/**
 * The toy: a "search" that counts from 0 to N on real threads and finds every number whose cube is 1 modulo 1009. It has
 * no lattice in it, so that the station's loops and the queue can be tried, fast and with faults on demand. N is the p
 * of a fraction source; the title says how it behaves.
 */
export interface ToyPlan {
  readonly n: number;
  /** Microseconds of a busy thread for each number: the same on every machine. */
  readonly spin: number;
  /** The thread dies when it gets to this number. */
  readonly crashAt: number | null;
  /** Looks for one number only, and this is it. */
  readonly oneAt: number | null;
  /** Does not look at its commands. */
  readonly deaf: boolean;
  /** The checker rejects. */
  readonly rejected: boolean;
  /** Settled by the first look. */
  readonly quick: boolean;
  /** The check is run in parcels. */
  readonly longCheck: boolean;
  /** The certificate is written in chunks, with so many milliseconds of work for each. */
  readonly chunkMs: number | null;
  readonly stages: number;
  /** The last parcel of the cover has nearly everything. */
  readonly lopsided: boolean;
}

export const TOY_PARCELS = 6;

export function toyDocument(n: number, title = ''): string {
  return JSON.stringify({
    format: 'palmette.question/1',
    title,
    source: { kind: 'fraction', p: n, q: 1, orientation: 'chain' },
    target: { dimension: 3 },
    scope: /one at/.test(title) ? 'one' : 'all',
    tests: [],
  });
}

export function readToy(document: string): ToyPlan {
  const { source, title = '' } = JSON.parse(document) as { source: { p: number }; title?: string };
  const after = (word: string) => {
    const found = new RegExp(`${word} (\\d+)`).exec(title);
    return found === null ? null : Number(found[1]);
  };
  return {
    n: source.p,
    spin: after('spin') ?? 15,
    crashAt: after('crash at'),
    oneAt: after('one at'),
    deaf: title.includes('deaf'),
    rejected: title.includes('rejected'),
    quick: title.includes('quick'),
    longCheck: title.includes('long check'),
    chunkMs: after('chunk every'),
    stages: after('stages') ?? 1,
    lopsided: title.includes('lopsided'),
  };
}

export const isFound = (i: number): boolean => (((i * i) % 1009) * i) % 1009 === 1;

/** What a search to n must end with, computed without parcels. */
export function toyCertificate(plan: ToyPlan): string {
  const found = plan.oneAt === null ? [] : [plan.oneAt];
  if (plan.oneAt === null) for (let i = 0; i < plan.n; i += 1) if (isFound(i)) found.push(i);
  return toyBytes(plan, found);
}

export function toyBytes(plan: ToyPlan, found: readonly number[]): string {
  return JSON.stringify({ format: 'toy', n: plan.n, found });
}
