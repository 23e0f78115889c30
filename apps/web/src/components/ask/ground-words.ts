/** What arithmetic and the quick look say, in sentences. */
import {
  countInWords,
  exclusionClause,
  exclusionReason,
  plural,
  roughSpanInWords,
  space,
  spanInWords,
  spreadInWords,
} from '@palmette/wording';
import type { ArithmeticReading, DimensionGround, QuickLook, SourceReading } from '../../workers/preview-messages.ts';

function factsOf({ dimension, ground }: DimensionGround, reading: SourceReading) {
  return {
    ground: ground.ground,
    dimension,
    rank: reading.rank,
    determinant: reading.determinant,
    primes: ground.ground === 'hilbert' ? ground.primes : undefined,
    columns: ground.ground === 'column' ? ground : undefined,
  };
}

export interface Said {
  readonly heading: string;
  readonly lead: string;
}

/** The verdict that arithmetic gives by itself. */
export function settledInWords(arithmetic: ArithmeticReading, reading: SourceReading): Said {
  const last = arithmetic.excluded.at(-1)!;
  const { nowhere } = arithmetic;
  const clauses = arithmetic.excluded.slice(0, -1).map((one) => capital(`${exclusionClause(factsOf(one, reading))}.`));
  const reason = exclusionReason(factsOf(last, reading));
  if (nowhere !== null) {
    const everywhere = exclusionReason(factsOf({ dimension: null, ground: nowhere }, reading));
    return {
      heading: `Excluded: it embeds in no Z^n${last.dimension === null ? '' : `, ${space(last.dimension)} included`}.`,
      lead: last.ground.ground === 'column' ? everywhere : `${everywhere} ${reason}`,
    };
  }
  return {
    heading: `Excluded: it does not embed in ${space(last.dimension!)}.`,
    lead: [reason, ...clauses].join(' '),
  };
}

/** “41 is not a square, so Z^8 is excluded. …” where arithmetic is on the way but does not settle the question. */
export function excludedOnTheWay(arithmetic: ArithmeticReading, reading: SourceReading): string {
  return arithmetic.excluded.map((one) => capital(`${exclusionClause(factsOf(one, reading))}.`)).join(' ');
}

/** What the quick look saw. It is never a verdict: only a certificate is. */
export function quickInWords(quick: Exclude<QuickLook, { kind: 'none' }>): Said {
  const looked = `${plural(quick.nodes, 'node')} in ${spanInWords(quick.ms / 1000)}`;
  if (quick.kind === 'done') {
    if (quick.verdict === 'excluded') {
      return {
        heading:
          quick.dimension === null
            ? 'It seems to embed in no Z^n.'
            : `It seems not to embed in ${space(quick.dimension)}.`,
        lead: `A quick look in this browser went through the whole tree, ${looked}, and found nothing. It is not certified.`,
      };
    }
    const where = quick.dimension === null ? 'some Z^n' : space(quick.dimension);
    const count = quick.orbits === '1' ? 'one way' : plural(quick.orbits, 'way');
    const ways = quick.complete ? `, in exactly ${count} up to symmetry` : '';
    return {
      heading: `It seems to embed in ${where}${ways}.`,
      lead: `A quick look in this browser, ${looked}. It is not certified.`,
    };
  }
  const found =
    quick.orbits === '0'
      ? 'It found nothing so far, which says nothing about the answer'
      : `It found ${plural(quick.orbits, 'embedding')} so far, and others may follow`;
  return {
    heading: quick.dimension === null ? 'It needs a search.' : `${space(quick.dimension)} needs a search.`,
    lead: `A quick look in this browser listed ${countInWords(quick.nodes)} nodes. ${found}. ${timeInWords(quick.seconds)}${othersInWords(quick)}`,
  };
}

/** A look that tried one method says so: the search has three, and the best may need a fraction of the time. */
function othersInWords({ seconds, tried }: Extract<QuickLook, { kind: 'unfinished' }>): string {
  if (seconds === null || seconds.high < WORTH_COMPARING || tried.length > 1) return '';
  return ` That is by ${tried[0]!} alone; the search compares its methods, and another may be much faster.`;
}

/** Seconds. */
const WORTH_COMPARING = 10;
/** Seconds in 100 years. */
const OUT_OF_REACH = 100 * 365 * 86_400;

function timeInWords(seconds: { readonly low: number; readonly likely: number; readonly high: number } | null): string {
  if (seconds === null) return 'How long the whole takes cannot be told yet.';
  if (seconds.low > OUT_OF_REACH) return 'By its estimate the whole is out of reach: more than 100 years of CPU time.';
  if (seconds.high > OUT_OF_REACH)
    return `How long the whole takes cannot be told: from ${roughSpanInWords(seconds.low)} to more than 100 years of CPU time (8 times in 10).`;
  if (seconds.high < 1) return 'The whole should take under a second.';
  return `The whole should take about ${roughSpanInWords(seconds.likely)} of CPU time (${spreadInWords(seconds)}).`;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/** “Z/3 + Z/9”, “trivial”; many summands are counted. */
export function groupInWords(divisors: readonly string[]): string {
  if (divisors.length === 0) return 'trivial';
  const counts = new Map<string, number>();
  for (const d of divisors) counts.set(d, (counts.get(d) ?? 0) + 1);
  return [...counts]
    .map(([d, count]) => (count === 1 ? `Z/${countInWords(d)}` : `(Z/${countInWords(d)})^{${count}}`))
    .join(' + ');
}
