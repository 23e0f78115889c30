/** PostgreSQL refuses a product of doubles that is too small to be told from zero: shares stay well above. */
const LEAST_SHARE = 1e-30;
const LEAST_PART = 1e-12;

export function storedShare(share: number): number {
  return share === 0 ? 0 : Math.max(LEAST_SHARE, share);
}

/** A part of something, 0 to 1. */
export function storedPart(part: number): number {
  return part < LEAST_PART || Number.isNaN(part) ? 0 : Math.min(1, part);
}
