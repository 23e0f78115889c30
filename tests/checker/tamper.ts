/** A corpus of certificates that say something false, made from a true one. Hashes are renewed, so that only the check itself can notice. */
import { createHash } from 'node:crypto';

type Json = null | boolean | number | string | Json[] | { [key: string]: Json };
type Edit = (certificate: { [key: string]: Json }) => void;

export interface Tampered {
  readonly name: string;
  readonly bytes: Uint8Array;
}

const encode = (text: string) => new TextEncoder().encode(text);

/** Writes a changed certificate with a colophon that fits its bytes. */
export function resealed(certificate: { [key: string]: Json }): Uint8Array {
  const { end, ...rest } = certificate;
  const head = JSON.stringify(rest).slice(0, -1);
  const records = Array.isArray(certificate['embeddings'])
    ? certificate['embeddings'].length
    : (end as { records: number }).records;
  return encode(
    `${head},"end":${JSON.stringify({ records, sha256: createHash('sha256').update(head).digest('hex') })}}\n`,
  );
}

const at = (value: Json, ...path: (string | number)[]): { [key: string]: Json } =>
  path.reduce<Json>((v, step) => (v as { [key: string]: Json })[step]!, value) as { [key: string]: Json };
const plusOne = (text: Json | undefined) => String(BigInt(text as string) + 1n);

/** Names of members whose change says something else; applied where the certificate has them. */
function edits(certificate: { [key: string]: Json }): [string, Edit][] {
  const out: [string, Edit][] = [];
  const list = certificate['embeddings'] as Json[];
  const claim = at(certificate, 'claim');
  const evidence = at(certificate, 'evidence');
  const tree = (evidence['list'] ?? at(evidence, 'exclusions')[0]?.valueOf()) as { [key: string]: Json } | undefined;
  if (list.length > 0) {
    out.push(['an embedding dropped', (c) => void (c['embeddings'] as Json[]).pop()]);
    out.push(['an embedding doubled', (c) => void (c['embeddings'] as Json[]).push(structuredClone(list[0]!))]);
    out.push([
      'a column negated and listed again',
      (c) => {
        const copy = structuredClone(list[0]!) as { matrix: number[][] };
        copy.matrix = copy.matrix.map((row) => [-row[0]!, ...row.slice(1)]);
        (c['embeddings'] as Json[]).push(copy as unknown as Json);
      },
    ]);
    out.push([
      'a sign flipped',
      (c) => {
        const { matrix } = at(c, 'embeddings', 0) as unknown as { matrix: number[][] };
        // a column with two entries: turning one of them changes an inner product (a lone entry may be turned)
        const j = matrix[0]!.findIndex((_, k) => matrix.filter((row) => row[k] !== 0).length > 1);
        if (j >= 0) {
          const row = matrix.find((r) => r[j] !== 0)!;
          row[j] = -row[j]!;
        } else matrix[0]![0] = 2 * matrix[0]![0]! + 1;
      },
    ]);
    out.push([
      'an entry changed',
      (c) => {
        const { matrix } = at(c, 'embeddings', 0) as unknown as { matrix: number[][] };
        matrix[0]![0] = matrix[0]![0]! + 1;
      },
    ]);
    out.push([
      'an orbit size changed',
      (c) => (at(c, 'embeddings', 0)['orbitSize'] = plusOne(at(c, 'embeddings', 0)['orbitSize'])),
    ]);
    out.push(['a row left out', (c) => void (at(c, 'embeddings', 0)['matrix'] as Json[]).pop()]);
  }
  if (claim['orbits'] !== undefined)
    out.push(['the number of orbits changed', (c) => (at(c, 'claim')['orbits'] = plusOne(claim['orbits']))]);
  if (claim['total'] !== undefined)
    out.push(['the total changed', (c) => (at(c, 'claim')['total'] = plusOne(claim['total']))]);
  out.push([
    'the verdict turned',
    (c) => (at(c, 'claim')['verdict'] = claim['verdict'] === 'embeds' ? 'excluded' : 'embeds'),
  ]);
  out.push(['the verdict opened', (c) => (at(c, 'claim')['verdict'] = 'open')]);
  out.push(['complete turned', (c) => (at(c, 'claim')['complete'] = !claim['complete'])]);
  out.push(['the scope turned', (c) => (at(c, 'claim')['scope'] = claim['scope'] === 'all' ? 'one' : 'all')]);
  out.push(['the target of the claim changed', (c) => (at(c, 'claim')['target'] = { dimension: 4711 })]);
  if (typeof claim['dimension'] === 'number')
    out.push(['the dimension changed', (c) => (at(c, 'claim')['dimension'] = (claim['dimension'] as number) + 1)]);
  out.push([
    'the ground changed',
    (c) => (at(c, 'claim')['ground'] = claim['ground'] === 'determinant' ? 'hilbert' : 'determinant'),
  ]);
  out.push([
    'the Gram matrix changed',
    (c) => ((at(c, 'lattice')['gram'] as string[][])[0]![0] = plusOne((at(c, 'lattice')['gram'] as string[][])[0]![0])),
  ]);
  out.push([
    'the determinant changed',
    (c) => (at(c, 'lattice')['determinant'] = plusOne(at(c, 'lattice')['determinant'])),
  ]);
  out.push(['the sign changed', (c) => (at(c, 'lattice')['sign'] = -(at(c, 'lattice')['sign'] as unknown as number))]);
  out.push([
    'the rank changed',
    (c) => (at(c, 'lattice')['rank'] = (at(c, 'lattice')['rank'] as unknown as number) + 1),
  ]);
  out.push([
    'the nullity changed',
    (c) => (at(c, 'lattice')['nullity'] = (at(c, 'lattice')['nullity'] as unknown as number) + 1),
  ]);
  out.push(['the source changed', (c) => (at(c, 'question')['source'] = { kind: 'matrix', rows: [[97]] })]);
  out.push(['an unknown key', (c) => (at(c, 'claim')['remark'] = 'true')]);
  if (tree !== undefined) out.push(['the evidence dropped', (c) => (c['evidence'] = { exclusions: [], list: null })]);
  if (tree?.['nodes'] !== undefined) {
    out.push(['the nodes changed', (c) => (at(c, 'evidence', 'list')['nodes'] = plusOne(tree['nodes']))]);
    out.push([
      'the orbits of the tree changed',
      (c) => (at(c, 'evidence', 'list')['orbits'] = plusOne(tree['orbits'])),
    ]);
    out.push([
      'the width of the tree changed',
      (c) => (at(c, 'evidence', 'list')['dimension'] = (tree['dimension'] as number) - 1),
    ]);
    if ((tree['order'] as Json[]).length > 1)
      out.push([
        'the order is no permutation',
        (c) => ((at(c, 'evidence', 'list')['order'] as Json[])[0] = (tree['order'] as Json[])[1]!),
      ]);
  }
  return [...out, ...evidenceEdits(certificate)];
}

/** What a tree of any method or a ground says about its search, each made false. */
function evidenceEdits(certificate: { [key: string]: Json }): [string, Edit][] {
  const evidence = at(certificate, 'evidence');
  const places: (string | number)[][] = [
    ['evidence', 'list'],
    ['evidence', 'second'],
    ...(evidence['exclusions'] as Json[]).flatMap((_, i) => [
      ['evidence', 'exclusions', i, 'tree'],
      ['evidence', 'exclusions', i],
    ]),
  ];
  return places.flatMap((place) => {
    const there = place.reduce<Json | undefined>(
      (v, step) => (v as { [key: string]: Json } | null)?.[step],
      certificate,
    );
    if (there === null || there === undefined) return [];
    const member = there as { [key: string]: Json };
    const name = place.slice(1).join('/');
    const out: [string, Edit][] = ['nodes', 'vectors', 'glued', 'orbits']
      .filter((key) => typeof member[key] === 'string')
      .map((key) => [`${name}: ${key} one more`, (c) => (at(c, ...place)[key] = plusOne(member[key]))]);
    if (typeof member['spanned'] === 'number')
      out.push([`${name}: spanned one more`, (c) => (at(c, ...place)['spanned'] = (member['spanned'] as number) + 1)]);
    // Hilbert symbols need one failing prime only, gluing needs all primes of the determinant
    if (member['glued'] !== undefined) {
      const primes = member['primes'] as string[];
      out.push([`${name}: a prime left out`, (c) => (at(c, ...place)['primes'] = primes.slice(1))]);
      out.push([`${name}: a prime too many`, (c) => (at(c, ...place)['primes'] = [...primes, '1000003'])]);
      out.push([`${name}: no prime`, (c) => (at(c, ...place)['primes'] = [...primes.slice(0, -1), '1000001'])]);
    }
    if (member['method'] !== undefined) {
      out.push([
        `${name}: another method`,
        (c) => (at(c, ...place)['method'] = member['method'] === 'rows' ? 'frames' : 'rows'),
      ]);
      if (typeof member['dimension'] === 'number')
        out.push([`${name}: narrower`, (c) => (at(c, ...place)['dimension'] = (member['dimension'] as number) - 1)]);
    }
    return out;
  });
}

/** Every false variant of a certificate in its one-object form; unknown versions and damaged files are apart. */
export function tamper(certificate: Uint8Array): Tampered[] {
  const read = () => JSON.parse(new TextDecoder().decode(certificate)) as { [key: string]: Json };
  const changed = edits(read()).map(([name, edit]): Tampered => {
    const copy = read();
    edit(copy);
    return { name, bytes: resealed(copy) };
  });
  const text = new TextDecoder().decode(certificate);
  const cuts = [
    0,
    1,
    10,
    Math.floor(text.length / 3),
    Math.floor(text.length / 2),
    text.length - 60,
    text.length - 3,
  ].map((n) => ({ name: `cut off after ${n} bytes`, bytes: certificate.slice(0, n) }));
  const damaged = [
    { name: 'a byte appended', bytes: encode(`${text} `) },
    { name: 'an object appended', bytes: encode(`${text}{}`) },
    {
      name: 'a hash digit changed',
      bytes: encode(text.replace(/"sha256":"(.)/, (_, d: string) => `"sha256":"${d === '0' ? '1' : '0'}`)),
    },
    { name: 'white space put in', bytes: encode(text.replace('"claim":', '"claim": ')) },
    { name: 'a doubled key', bytes: encode(text.replace('"claim":{', '"claim":{"verdict":"embeds",')) },
    { name: 'a byte order mark', bytes: encode(`\ufeff${text}`) },
    { name: 'a fraction', bytes: encode(text.replace(/"rank":(\d+)/, '"rank":$1.0')) },
    {
      name: 'bytes that are no UTF-8',
      bytes: Uint8Array.from([...certificate.slice(0, 40), 0xff, ...certificate.slice(40)]),
    },
  ];
  return [...changed, ...cuts, ...damaged];
}

/** Variants that a reader of this revision cannot judge. */
export function unknownVersions(certificate: Uint8Array): Tampered[] {
  const read = () => JSON.parse(new TextDecoder().decode(certificate)) as { [key: string]: Json };
  const variant = (name: string, edit: Edit): Tampered => {
    const copy = read();
    edit(copy);
    return { name, bytes: resealed(copy) };
  };
  return [
    variant('another format', (c) => (c['format'] = 'palmette.certificate/2')),
    variant('an unknown ground', (c) => (at(c, 'claim')['ground'] = 'oracle')),
  ];
}
