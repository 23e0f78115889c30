/**
 * npm run bench:scale: how far ours reaches. Options: --part=growth|families|cores (all three), --limit=SECONDS for a point of
 * growth (60), --for=SECONDS (start no new point after that; run again to go on), --only="star +1", --print (growth from
 * what was measured), --m=M (families up to m = M, 50), --scope=one|all (families, one).
 */
import { parseArgs } from 'node:util';
import { cores } from './cores.ts';
import { families } from './families.ts';
import { growth } from './growth.ts';

const { values } = parseArgs({
  options: {
    part: { type: 'string', default: 'growth,families,cores' },
    limit: { type: 'string', default: '60' },
    for: { type: 'string', default: 'Infinity' },
    only: { type: 'string', default: '' },
    print: { type: 'boolean', default: false },
    m: { type: 'string', default: '50' },
    scope: { type: 'string', default: 'one' },
  },
});
const has = (part: string) => values.part.split(',').includes(part);

if (has('growth'))
  growth({ limit: Number(values.limit), seconds: Number(values.for), only: values.only, print: values.print });
if (has('families')) await families({ most: Number(values.m), scope: values.scope === 'all' ? 'all' : 'one' });
if (has('cores')) cores();
