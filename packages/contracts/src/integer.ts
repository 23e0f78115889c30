/** Integers on the wire: a JSON number up to 2^53 − 1 in size, a decimal string of any size. INTERFACES.md, "Numbers". */
import { z } from 'zod';
import { extendZodWithOpenApi } from '@asteasolutions/zod-to-openapi';
import { LIMITS } from './limits.ts';
import { quoteShort } from './strict-json.ts';

extendZodWithOpenApi(z);

export type WireInteger = number | string;

const DECIMAL = /^-?(?:0|[1-9][0-9]*)$/;

/** Undefined if `value` is an integer as the wire carries it, else the words "expected …, found …". */
export function integerFault(value: unknown): string | undefined {
  if (typeof value === 'number') {
    if (Object.is(value, -0)) return 'expected an integer, found -0; write 0';
    if (Number.isSafeInteger(value)) return undefined;
    return Number.isInteger(value)
      ? `${value} is too big for a JSON number; send it as a string of decimal digits`
      : `expected an integer, found ${value}`;
  }
  if (typeof value === 'string') {
    if (!DECIMAL.test(value) || value === '-0')
      return `expected an integer such as 12 or "-3", found ${JSON.stringify(quoteShort(value))}`;
    const digits = value.length - (value.startsWith('-') ? 1 : 0);
    if (digits > LIMITS.digits) return `expected at most ${LIMITS.digits} digits, found ${digits}`;
    return undefined;
  }
  return `expected an integer, found ${describeValue(value)}`;
}

/** What a value is, in words, for messages. */
export function describeValue(value: unknown): string {
  if (value === undefined) return 'nothing';
  if (value === null) return 'null';
  if (Array.isArray(value)) return `a list of ${value.length}`;
  if (typeof value === 'object') return 'an object';
  if (typeof value === 'string') return JSON.stringify(quoteShort(value));
  return String(value);
}

/** Schema of a wire integer. */
export const wireInteger = z
  .any()
  .superRefine((value, context) => {
    const fault = integerFault(value);
    if (fault !== undefined)
      context.addIssue({
        code: 'custom',
        message: fault,
        params: { refusal: fault.includes('digits,') ? 'limit' : 'integer' },
      });
  })
  .transform((value) => value as WireInteger)
  .openapi({
    description: 'An integer: a JSON number up to 2^53 − 1 in size, or a decimal string of any size.',
    anyOf: [{ type: 'integer' }, { type: 'string', pattern: '^-?(0|[1-9][0-9]*)$' }],
  } as never);

/** The same number in its one canonical spelling: a number where it is safe, a string beyond. */
export function canonicalInteger(value: WireInteger | bigint): WireInteger {
  const big = BigInt(value);
  const small = Number(big);
  return Number.isSafeInteger(small) ? small : big.toString();
}
