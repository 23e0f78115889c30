/** SHA-256 (FIPS 180-4), so that the checker needs no platform. Bytes in, lower-case hexadecimal out. */

/** First 32 bits of the fractional parts of the roots of the first primes: square roots start, cube roots are the keys. */
function fractions(count: number, root: (x: number) => number): number[] {
  const out: number[] = [];
  for (let n = 2; out.length < count; n += 1) {
    let prime = true;
    for (let d = 2; d * d <= n; d += 1) if (n % d === 0) prime = false;
    if (prime) out.push(Math.floor((root(n) % 1) * 2 ** 32) >>> 0);
  }
  return out;
}

const START = fractions(8, Math.sqrt);
const KEYS = Int32Array.from(fractions(64, Math.cbrt));

export function sha256Hex(bytes: Uint8Array): string {
  const hash = Int32Array.from(START);
  const w = new Int32Array(64);
  const blocks = Math.floor((bytes.length + 8) / 64) + 1;
  const tail = new Uint8Array(128);
  const whole = Math.floor(bytes.length / 64);
  tail.set(bytes.subarray(whole * 64));
  tail[bytes.length - whole * 64] = 0x80;
  const tailBlocks = blocks - whole;
  const view = new DataView(tail.buffer);
  view.setUint32(tailBlocks * 64 - 8, Math.floor(bytes.length / 2 ** 29));
  view.setUint32(tailBlocks * 64 - 4, (bytes.length << 3) >>> 0);
  for (let k = 0; k < blocks; k += 1) {
    const from = k < whole ? bytes : tail;
    const offset = k < whole ? k * 64 : (k - whole) * 64;
    for (let i = 0; i < 16; i += 1) {
      const j = offset + 4 * i;
      w[i] = (from[j]! << 24) | (from[j + 1]! << 16) | (from[j + 2]! << 8) | from[j + 3]!;
    }
    compress(hash, w);
  }
  return [...hash].map((x) => (x >>> 0).toString(16).padStart(8, '0')).join('');
}

function compress(hash: Int32Array, w: Int32Array): void {
  const turn = (x: number, n: number) => (x >>> n) | (x << (32 - n));
  for (let i = 16; i < 64; i += 1) {
    const a = w[i - 15]!;
    const b = w[i - 2]!;
    w[i] =
      (w[i - 16]! + (turn(a, 7) ^ turn(a, 18) ^ (a >>> 3)) + w[i - 7]! + (turn(b, 17) ^ turn(b, 19) ^ (b >>> 10))) | 0;
  }
  let [a, b, c, d, e, f, g, h] = hash as unknown as [number, number, number, number, number, number, number, number];
  for (let i = 0; i < 64; i += 1) {
    const t1 = (h + (turn(e, 6) ^ turn(e, 11) ^ turn(e, 25)) + ((e & f) ^ (~e & g)) + KEYS[i]! + w[i]!) | 0;
    const t2 = ((turn(a, 2) ^ turn(a, 13) ^ turn(a, 22)) + ((a & b) ^ (a & c) ^ (b & c))) | 0;
    h = g;
    g = f;
    f = e;
    e = (d + t1) | 0;
    d = c;
    c = b;
    b = a;
    a = (t1 + t2) | 0;
  }
  [a, b, c, d, e, f, g, h].forEach((x, i) => (hash[i] = (hash[i]! + x) | 0));
}
