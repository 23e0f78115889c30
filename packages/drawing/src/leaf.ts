/** The leaf: foot at the crossing, pointing 38 degrees up to the right; turned by half a turn it hangs below to the left. */
import type { PathStep } from './marks.ts';

const COS = Math.cos((38 * Math.PI) / 180);
const SIN = Math.sin((38 * Math.PI) / 180);

/** Corners of the curve along the leaf and across it, as parts of length and width: one side and, mirrored, the other. */
const NEAR = [0.18, 0.52] as const;
const FAR = [0.6, 0.68] as const;

/** @param turn −1 for the leaf turned by 180 degrees */
export function leafPath(x: number, y: number, length: number, width: number, turn: 1 | -1): readonly PathStep[] {
  const at = (along: number, across: number): [number, number] => {
    const [u, v] = [along * length * turn, across * width * turn];
    return [x + u * COS + v * SIN, y - u * SIN + v * COS];
  };
  return [
    ['M', x, y],
    ['C', ...at(...NEAR), ...at(...FAR), ...at(1, 0)],
    ['C', ...at(FAR[0], -FAR[1]), ...at(NEAR[0], -NEAR[1]), x, y],
    ['Z'],
  ];
}
