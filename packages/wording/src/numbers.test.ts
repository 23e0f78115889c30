import { describe, expect, it } from 'vitest';
import {
  bytesInWords,
  countInWords,
  integerInWords,
  isCut,
  listInWords,
  plural,
  roughlyInWords,
  shareInWords,
} from './numbers.ts';

const thin = (text: string) => text.replaceAll('_', '\u202f');

describe('numbers in words', () => {
  it.each([
    ['0', '0'],
    ['4096', '4096'],
    ['10000', '10_000'],
    ['185794560', '185_794_560'],
    ['-41', '−41'],
    ['-1234567', '−1_234_567'],
    ['123456789012345678901234', '123_456_789_012_345_678_901_234'],
  ])('%s is grouped by thin spaces and never by commas', (value, words) => {
    expect(integerInWords(value)).toBe(thin(words));
    expect(integerInWords(BigInt(value))).toBe(thin(words));
  });

  it('cuts what does not fit on a line and says how many digits there are', () => {
    const total = (2n ** 51n * 10n ** 66n).toString();
    expect(countInWords(total)).toBe(thin('225_179… (82 digits)'));
    expect(isCut(total)).toBe(true);
    expect(isCut('123456789012345678901234')).toBe(false);
  });

  it('knows one from many', () => {
    expect(plural('1', 'orbit')).toBe('1 orbit');
    expect(plural(12, 'vertex', 'vertices')).toBe('12 vertices');
    expect(plural(0, 'embedding')).toBe('0 embeddings');
  });

  it.each([
    [0, '0%'],
    [0.002, 'under 1%'],
    [0.61, '61%'],
    [0.999, 'over 99%'],
    [1, '100%'],
  ])('a share of %d is %s', (share, words) => expect(shareInWords(share)).toBe(words));

  it.each([
    [1, '1 byte'],
    [840, '840 bytes'],
    [2_100, '2.1 kB'],
    [8_388_608, '8.4 MB'],
  ])('%d bytes are %s', (bytes, words) => expect(bytesInWords(bytes)).toBe(words));

  it('rounds rates to three figures', () => {
    expect(roughlyInWords(172_431)).toBe(thin('172_000'));
    expect(roughlyInWords(87)).toBe('87');
    expect(roughlyInWords(0)).toBe('0');
  });

  it('joins a list', () => {
    expect(listInWords(['2', '3', '17'])).toBe('2, 3 and 17');
    expect(listInWords(['2'])).toBe('2');
  });
});
