/**
 * A set of hashes in little memory: 127 bits of each, in one typed array with open addressing; 32 to 64 bytes for each. Two
 * orbits that agree in all of these bits would be taken for one and the certificate refused; none is ever accepted by it.
 */
const WORDS = 4;
const FIRST_SLOTS = 1024;

export class KeySet {
  size = 0;
  private slots = FIRST_SLOTS;
  private table = new Uint32Array(FIRST_SLOTS * WORDS);

  /**
   * @param hex a hash, at least 32 hexadecimal digits
   * @returns false if it was there before
   */
  add(hex: string): boolean {
    const key = Array.from({ length: WORDS }, (_, w) => Number.parseInt(hex.slice(8 * w, 8 * w + 8), 16));
    key[0] = (key[0]! | 1) >>> 0; // an empty slot is one whose first word is 0
    const at = this.find(key);
    if (this.table[at] !== 0) return false;
    this.table.set(key, at);
    this.size += 1;
    if (2 * this.size > this.slots) this.grow();
    return true;
  }

  /** The slot of a key, or the empty one where it belongs. */
  private find(key: ArrayLike<number>): number {
    for (let slot = key[1]! % this.slots; ; slot = (slot + 1) % this.slots) {
      const at = slot * WORDS;
      if (this.table[at] === 0) return at;
      let same = true;
      for (let w = 0; same && w < WORDS; w += 1) same = this.table[at + w] === key[w];
      if (same) return at;
    }
  }

  private grow(): void {
    const before = this.table;
    this.slots *= 2;
    this.table = new Uint32Array(this.slots * WORDS);
    for (let at = 0; at < before.length; at += WORDS) {
      if (before[at] === 0) continue;
      const key = before.subarray(at, at + WORDS);
      this.table.set(key, this.find(key));
    }
  }
}
