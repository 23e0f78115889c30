/**
 * A strict JSON reader (RFC 8259) that refuses what `JSON.parse` lets through or alters:
 * doubled keys, fractions, exponents, −0, integers beyond 2^53 − 1 as numbers, lone
 * surrogates, a byte order mark, and nesting over the limit. DECISIONS.md, section 7.
 */
import { Refusal } from './errors.ts';
import { LIMITS } from './limits.ts';

export type StrictJson = null | boolean | number | string | StrictJson[] | { [key: string]: StrictJson };

/** Escapes one step of a JSON Pointer (RFC 6901). */
export function pointerStep(step: string | number): string {
  return `/${String(step).replaceAll('~', '~0').replaceAll('/', '~1')}`;
}

const NUMBER = /-?[0-9][0-9]*(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?/y;
const INTEGER = /^-?(?:0|[1-9][0-9]*)$/;
const WORD = /[A-Za-z]+/y;
// eslint-disable-next-line no-control-regex -- control characters are exactly what must not occur
const PLAIN = /[^"\\\u0000-\u001f]*/y;
const ESCAPES: Readonly<Record<string, string>> = {
  '"': '"',
  '\\': '\\',
  '/': '/',
  b: '\b',
  f: '\f',
  n: '\n',
  r: '\r',
  t: '\t',
};

/** How a stretch of input is quoted in a message. */
export function quoteShort(text: string, length = 40): string {
  return text.length <= length ? text : `${text.slice(0, length)}… (${text.length} characters)`;
}

class Reader {
  private at = 0;
  constructor(private readonly text: string) {}

  document(): StrictJson {
    if (this.text.charCodeAt(0) === 0xfeff)
      this.fail('', 'the document starts with a byte order mark; send it without one');
    if (!this.text.isWellFormed()) this.fail('', 'the document holds a lone surrogate, which is no character');
    const value = this.value('', 0);
    this.space();
    if (this.at < this.text.length) this.fail('', `expected the end of the document, found ${this.found()}`);
    return value;
  }

  private fail(path: string, message: string): never {
    throw new Refusal('json', `${message} (character ${this.at + 1})`, path);
  }

  private found(): string {
    return this.at >= this.text.length
      ? 'the end of the text'
      : JSON.stringify(quoteShort(this.text.slice(this.at, this.at + 12), 12));
  }

  private space(): void {
    for (;;) {
      const c = this.text.charCodeAt(this.at);
      if (c !== 32 && c !== 10 && c !== 13 && c !== 9) return;
      this.at += 1;
    }
  }

  private match(pattern: RegExp): string | undefined {
    pattern.lastIndex = this.at;
    const hit = pattern.exec(this.text);
    if (hit === null) return undefined;
    this.at += hit[0].length;
    return hit[0];
  }

  private value(path: string, depth: number): StrictJson {
    if (depth > LIMITS.depth) throw new Refusal('limit', `nesting deeper than ${LIMITS.depth}`, path);
    this.space();
    const c = this.text[this.at];
    if (c === '{') return this.object(path, depth);
    if (c === '[') return this.array(path, depth);
    if (c === '"') return this.string(path);
    if (c === '-' || (c !== undefined && c >= '0' && c <= '9')) return this.number(path);
    const start = this.at;
    const word = this.match(WORD);
    if (word === 'true') return true;
    if (word === 'false') return false;
    if (word === 'null') return null;
    this.at = start;
    if (word !== undefined) throw new Refusal('json', `expected a JSON value, found ${quoteShort(word)}`, path);
    return this.fail(path, `expected a JSON value, found ${this.found()}`);
  }

  private number(path: string): number {
    const token = this.match(NUMBER);
    if (token === undefined) return this.fail(path, `expected an integer, found ${this.found()}`);
    if (!INTEGER.test(token)) {
      throw new Refusal('integer', `expected an integer such as 12 or -3, found ${quoteShort(token)}`, path);
    }
    const value = Number(token);
    if (token === '-0') throw new Refusal('integer', 'expected an integer, found -0; write 0', path);
    if (!Number.isSafeInteger(value)) {
      throw new Refusal(
        'integer',
        `${quoteShort(token)} is too big for a JSON number; send it as the string "${quoteShort(token)}"`,
        path,
      );
    }
    return value;
  }

  private string(path: string): string {
    this.at += 1;
    let out = '';
    for (;;) {
      out += this.match(PLAIN) ?? '';
      const c = this.text[this.at];
      if (c === '"') {
        this.at += 1;
        if (!out.isWellFormed()) this.fail(path, 'a string holds a lone surrogate, which is no character');
        return out;
      }
      if (c !== '\\') this.fail(path, `expected the rest of a string, found ${this.found()}`);
      const e = this.text[this.at + 1] ?? '';
      if (e === 'u') {
        const hex = this.text.slice(this.at + 2, this.at + 6);
        if (!/^[0-9a-fA-F]{4}$/.test(hex))
          this.fail(path, `expected four hexadecimal digits after \\u, found ${JSON.stringify(hex)}`);
        out += String.fromCharCode(Number.parseInt(hex, 16));
        this.at += 6;
      } else {
        const plain = ESCAPES[e];
        if (plain === undefined) this.fail(path, `expected an escape of JSON, found \\${e}`);
        out += plain;
        this.at += 2;
      }
    }
  }

  private array(path: string, depth: number): StrictJson[] {
    this.at += 1;
    const items: StrictJson[] = [];
    this.space();
    if (this.text[this.at] === ']') {
      this.at += 1;
      return items;
    }
    for (;;) {
      items.push(this.value(`${path}/${items.length}`, depth + 1));
      this.space();
      const c = this.text[this.at];
      this.at += 1;
      if (c === ']') return items;
      if (c !== ',') {
        this.at -= 1;
        this.fail(path, `expected , or ] in a list, found ${this.found()}`);
      }
    }
  }

  private object(path: string, depth: number): { [key: string]: StrictJson } {
    this.at += 1;
    const entries = new Map<string, StrictJson>();
    this.space();
    if (this.text[this.at] === '}') {
      this.at += 1;
      return {};
    }
    for (;;) {
      this.space();
      if (this.text[this.at] !== '"') this.fail(path, `expected a key in quotes, found ${this.found()}`);
      const key = this.string(path);
      const inner = path + pointerStep(key);
      if (entries.has(key)) throw new Refusal('json', `the key ${JSON.stringify(quoteShort(key))} stands twice`, inner);
      this.space();
      if (this.text[this.at] !== ':') this.fail(inner, `expected : after a key, found ${this.found()}`);
      this.at += 1;
      entries.set(key, this.value(inner, depth + 1));
      this.space();
      const c = this.text[this.at];
      this.at += 1;
      if (c === '}') return Object.fromEntries(entries);
      if (c !== ',') {
        this.at -= 1;
        this.fail(path, `expected , or } in an object, found ${this.found()}`);
      }
    }
  }
}

/**
 * Reads one JSON document strictly.
 * @throws Refusal `json`, `integer` or `limit` with a JSON Pointer to the place.
 */
export function readStrictJson(text: string): StrictJson {
  return new Reader(text).document();
}
