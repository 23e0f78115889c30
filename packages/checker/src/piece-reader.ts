/** The bytes of a file that comes in pieces: what has been read is not held. */
const LINE_FEED = 10;

export class PieceReader {
  private readonly pieces: Iterator<Uint8Array>;
  private rest: Uint8Array = new Uint8Array(0);

  constructor(source: Uint8Array | Iterable<Uint8Array>) {
    this.pieces = (source instanceof Uint8Array ? [source] : source)[Symbol.iterator]();
  }

  /** Up to the next line feed, which is read and not given; or to the end. */
  line(): Uint8Array {
    const parts: Uint8Array[] = [];
    while (this.fill()) {
      const end = this.rest.indexOf(LINE_FEED);
      if (end >= 0) {
        parts.push(this.rest.subarray(0, end));
        this.rest = this.rest.subarray(end + 1);
        break;
      }
      parts.push(this.rest);
      this.rest = new Uint8Array(0);
    }
    return joined(parts);
  }

  /** So many bytes; fewer only at the end. */
  take(size: number): Uint8Array {
    const parts: Uint8Array[] = [];
    for (let left = size; left > 0 && this.fill();) {
      const part = this.rest.subarray(0, left);
      parts.push(part);
      this.rest = this.rest.subarray(part.length);
      left -= part.length;
    }
    return joined(parts);
  }

  /** Something is left to be read. */
  private fill(): boolean {
    while (this.rest.length === 0) {
      const next = this.pieces.next();
      if (next.done === true) return false;
      this.rest = next.value;
    }
    return true;
  }
}

function joined(parts: readonly Uint8Array[]): Uint8Array {
  if (parts.length === 1) return parts[0]!;
  const out = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}
