/** The checker's own strict reader: JSON text to values, refusing what FORMAT.md, section 2, rejects. */

/** Why a file is not accepted: a place and a reason. */
export class Rejection extends Error {
  override readonly name = 'Rejection';
  constructor(
    readonly place: string,
    readonly reason: string,
  ) {
    super(`${place}: ${reason}`);
  }
}

/** Something that this revision does not know or does not do: neither accepted nor rejected. */
export class NotChecked extends Error {
  override readonly name = 'NotChecked';
}

export type Json = null | boolean | number | string | readonly Json[] | JsonObject;
export interface JsonObject {
  readonly [key: string]: Json;
}

const MAX_DEPTH = 64;
const INTEGER = /-?(?:0|[1-9][0-9]*)(?![0-9.eE])/y;
const DECIMAL = /^-?(?:0|[1-9][0-9]*)$/;

export function readJson(text: string, place: string): Json {
  let at = 0;
  const fail = (reason: string): never => {
    throw new Rejection(place, `${reason} at character ${at + 1}`);
  };
  const space = () => {
    while (at < text.length && ' \n\r\t'.includes(text[at]!)) at += 1;
  };
  const word = (expected: string, value: Json): Json => {
    if (!text.startsWith(expected, at)) fail('no JSON value');
    at += expected.length;
    return value;
  };
  const readString = (): string => {
    let end = at + 1;
    while (end < text.length && text[end] !== '"') end += text[end] === '\\' ? 2 : 1;
    let value: unknown;
    try {
      value = JSON.parse(text.slice(at, end + 1));
    } catch {
      fail('a broken string');
    }
    if (typeof value !== 'string' || !value.isWellFormed()) fail('a broken string');
    at = end + 1;
    return value as string;
  };
  const readNumber = (): number => {
    INTEGER.lastIndex = at;
    const hit = INTEGER.exec(text)?.[0];
    if (hit === undefined || hit === '-0' || !Number.isSafeInteger(Number(hit)))
      fail('a number that is no integer up to 2^53 − 1');
    at += hit!.length;
    return Number(hit);
  };
  const readValue = (depth: number): Json => {
    if (depth > MAX_DEPTH) fail(`nesting deeper than ${MAX_DEPTH}`);
    space();
    const c = text[at];
    if (c === '"') return readString();
    if (c === '[') return readList(depth);
    if (c === '{') return readObject(depth);
    if (c === 't') return word('true', true);
    if (c === 'f') return word('false', false);
    if (c === 'n') return word('null', null);
    return readNumber();
  };
  const readList = (depth: number): Json[] => {
    const out: Json[] = [];
    at += 1;
    space();
    if (text[at] === ']') {
      at += 1;
      return out;
    }
    for (;;) {
      out.push(readValue(depth + 1));
      space();
      at += 1;
      if (text[at - 1] === ']') return out;
      if (text[at - 1] !== ',') fail('a list that is not continued');
    }
  };
  const readObject = (depth: number): JsonObject => {
    const out = new Map<string, Json>();
    at += 1;
    space();
    if (text[at] === '}') {
      at += 1;
      return {};
    }
    for (;;) {
      space();
      if (text[at] !== '"') fail('a key without quotes');
      const key = readString();
      if (out.has(key)) fail(`the key ${JSON.stringify(key)} twice`);
      space();
      if (text[at] !== ':') fail('a key without a value');
      at += 1;
      out.set(key, readValue(depth + 1));
      space();
      at += 1;
      if (text[at - 1] === '}') return Object.fromEntries(out);
      if (text[at - 1] !== ',') fail('an object that is not continued');
    }
  };
  if (text.charCodeAt(0) === 0xfeff) fail('a byte order mark');
  const value = readValue(0);
  space();
  if (at < text.length) fail('text after the end');
  return value;
}

/** The bytes as text; anything that is not UTF-8 is a rejection. */
export function decodeText(bytes: Uint8Array, place: string): string {
  try {
    return new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes);
  } catch {
    throw new Rejection(place, 'not UTF-8');
  }
}

/** An object with exactly the given keys; a key that ends in ? may be missing. */
export function objectOf(value: Json | undefined, place: string, keys: readonly string[]): JsonObject {
  if (value === null || typeof value !== 'object' || Array.isArray(value))
    throw new Rejection(place, 'expected an object');
  const object = value as JsonObject;
  const allowed = keys.map((k) => k.replace('?', ''));
  for (const key of Object.keys(object))
    if (!allowed.includes(key)) throw new Rejection(`${place}/${key}`, 'unknown key');
  for (const key of keys) if (!key.endsWith('?') && !(key in object)) throw new Rejection(`${place}/${key}`, 'missing');
  return object;
}

export function listOf(value: Json | undefined, place: string): readonly Json[] {
  if (!Array.isArray(value)) throw new Rejection(place, 'expected a list');
  return value as readonly Json[];
}

/** An integer as a number or a decimal string. */
export function integerOf(value: Json | undefined, place: string): bigint {
  if (typeof value === 'number') return BigInt(value);
  if (typeof value === 'string' && DECIMAL.test(value) && value !== '-0') return BigInt(value);
  throw new Rejection(place, 'expected an integer');
}

/** An integer that is always written as a string. */
export function stringIntegerOf(value: Json | undefined, place: string): bigint {
  if (typeof value !== 'string') throw new Rejection(place, 'expected an integer written as a string');
  return integerOf(value, place);
}

/** A small integer written as a number, at least `least`. */
export function countOf(value: Json | undefined, place: string, least = 0): number {
  if (typeof value !== 'number' || value < least)
    throw new Rejection(place, `expected a whole number, at least ${least}`);
  return value;
}

export function oneOf<T extends string>(value: Json | undefined, place: string, words: readonly T[]): T {
  if (!words.includes(value as T))
    throw new Rejection(place, `expected ${words.join(' or ')}, found ${JSON.stringify(value)}`);
  return value as T;
}
