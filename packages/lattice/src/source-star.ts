/** Seifert data and Montesinos links: normalised slopes, then a star-shaped plumbing. Conventions: FORMAT.md, section 3. */
import { floorDivide, gcd } from '@palmette/exact';
import { hirzebruchJung } from './hirzebruch-jung.ts';
import { plumbingForm, starGraph } from './plumbing.ts';
import {
  MAX_RANK,
  SourceFault,
  type BuiltForm,
  type MontesinosSource,
  type Orientation,
  type SeifertSource,
} from './source.ts';

interface Slope {
  readonly q: bigint;
  readonly p: bigint;
}

export function seifertForm(source: SeifertSource): BuiltForm {
  return starForm(
    BigInt(source.centre),
    source.fibres.map(([q, p], i) => readSlope(q, p, `/fibres/${i}`)),
    source.orientation,
    [],
  );
}

export function montesinosForm(source: MontesinosSource): BuiltForm {
  if ((source.slopes === undefined) === (source.pretzel === undefined)) {
    throw new SourceFault(
      '',
      'expected either slopes or pretzel, found ' + (source.slopes === undefined ? 'neither' : 'both'),
    );
  }
  if (source.pretzel !== undefined) {
    const slopes = source.pretzel.map((a, i) => {
      if (BigInt(a) === 0n) throw new SourceFault(`/pretzel/${i}`, 'expected a nonzero number of crossings, found 0');
      return normalSign(1n, BigInt(a));
    });
    return starForm(0n, slopes, source.orientation, [`Read as slopes ${slopes.map(slopeText).join(', ')}.`]);
  }
  const slopes = source.slopes!.map(([q, p], i) => {
    if (BigInt(q) === 0n) throw new SourceFault(`/slopes/${i}/0`, 'expected a nonzero slope, found 0');
    return readSlope(q, p, `/slopes/${i}`);
  });
  return starForm(0n, slopes, source.orientation, []);
}

function readSlope(q: number | string, p: number | string, path: string): Slope {
  const slope = { q: BigInt(q), p: BigInt(p) };
  if (slope.p === 0n) throw new SourceFault(`${path}/1`, 'expected a nonzero denominator, found 0');
  const common = gcd(slope.q, slope.p);
  if (common !== 1n)
    throw new SourceFault(path, `expected q and p without common factor, found ${slope.q}/${slope.p} with ${common}`);
  return normalSign(slope.q, slope.p);
}

function normalSign(q: bigint, p: bigint): Slope {
  return p < 0n ? { q: -q, p: -p } : { q, p };
}

function slopeText({ q, p }: Slope): string {
  return `${q < 0n ? '−' : ''}${q < 0n ? -q : q}/${p}`;
}

/** e = centre + Σ q/p as a fraction with positive denominator. */
function eulerNumber(centre: bigint, slopes: readonly Slope[]): Slope {
  return slopes.reduce((e, s) => ({ q: e.q * s.p + s.q * e.p, p: e.p * s.p }), { q: centre, p: 1n });
}

function starForm(
  centre: bigint,
  slopes: readonly Slope[],
  orientation: Orientation,
  remarks: readonly string[],
): BuiltForm {
  const e = eulerNumber(centre, slopes);
  const reversed = orientation === 'reversed' || (orientation === 'definite' && e.q > 0n);
  const turned = reversed ? slopes.map(({ q, p }) => ({ q: -q, p })) : slopes;
  let e0 = reversed ? -centre : centre;
  const legs: bigint[][] = [];
  let shifted = false;
  turned.forEach(({ q, p }) => {
    const whole = floorDivide(q, p);
    e0 += whole;
    shifted ||= whole !== 0n;
    const rest = q - whole * p;
    if (rest !== 0n) legs.push(hirzebruchJung(p, rest).map((a) => -a));
  });
  const size = legs.reduce((sum, leg) => sum + leg.length, 1);
  if (size > MAX_RANK) throw new SourceFault('', `expected at most ${MAX_RANK} vertices, found ${size}`, 'limit');
  const said = [...remarks];
  if (reversed && orientation === 'definite')
    said.push('Reversed: e = Σ of the slopes is positive, so the other orientation has the definite star.');
  if (shifted) said.push(`Normalised to central weight ${String(e0).replace('-', '−')} and slopes between 0 and 1.`);
  if (e.q === 0n) said.push('e = 0: the form is semidefinite with nullity 1.');
  return plumbingForm(starGraph(e0, legs), said, reversed ? 'reversed' : 'entered');
}
