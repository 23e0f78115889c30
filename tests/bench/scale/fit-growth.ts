/** Least squares on logarithms: seconds = a·bʳ or a·rᵉ, whichever leaves the smaller residual. */

export interface Point {
  readonly rank: number;
  readonly seconds: number;
}

/** Below this a time is noise of start-up. */
const FROM_SECONDS = 0.05;

/** The fitted law in words, or why there is none. */
export function fitGrowth(points: readonly Point[]): string {
  const used = points.filter(({ seconds }) => seconds >= FROM_SECONDS && Number.isFinite(seconds));
  if (used.length < 3) return `fewer than three ranks between ${FROM_SECONDS} s and the limit: no fit`;
  const logs = used.map(({ seconds }) => Math.log(seconds));
  const exponential = line(
    used.map(({ rank }) => rank),
    logs,
  );
  const power = line(
    used.map(({ rank }) => Math.log(rank)),
    logs,
  );
  const error = (residual: number) => `× ${Math.exp(Math.sqrt(residual / used.length)).toFixed(1)}`;
  return exponential.residual <= power.residual
    ? `× ${Math.exp(exponential.slope).toFixed(2)} for each rank (spread ${error(exponential.residual)}, ${used.length} points)`
    : `rank^${power.slope.toFixed(1)} (spread ${error(power.residual)}, ${used.length} points)`;
}

export function line(x: readonly number[], y: readonly number[]): { slope: number; residual: number } {
  const mean = (list: readonly number[]) => list.reduce((a, b) => a + b, 0) / list.length;
  const [mx, my] = [mean(x), mean(y)];
  const slope =
    x.reduce((sum, a, k) => sum + (a - mx) * (y[k]! - my), 0) / x.reduce((sum, a) => sum + (a - mx) * (a - mx), 0);
  const residual = y.reduce((sum, b, k) => sum + (b - my - slope * (x[k]! - mx)) ** 2, 0);
  return { slope, residual };
}
