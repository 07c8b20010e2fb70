/** A straight line of ln y on x. */
export interface LogLine {
  readonly slope: number;
  readonly slopeError: number;
  /** Sum of y^2 times the squared distance of ln y: nearly that of the distances of y itself. */
  readonly residual: number;
  /** Where slope and height are told independently, and the standard error of the height there. */
  readonly middle: number;
  readonly centreError: number;
  at(x: number): number;
}

/** Least squares of ln y on x over [from, to); points weighted by y^2, as even noise on y makes them; y <= 0 is passed over. */
export function logLine(x: Float64Array, y: Float64Array, from: number, to: number): LogLine {
  let [w0, wx, wy] = [0, 0, 0];
  for (let i = from; i < to; i++) {
    if (!(y[i] > 0)) continue;
    const w = y[i] * y[i];
    w0 += w;
    wx += w * x[i];
    wy += w * Math.log(y[i]);
  }
  const [mx, my] = [wx / w0, wy / w0];
  let [sxx, sxy, count] = [0, 0, 0];
  for (let i = from; i < to; i++) {
    if (!(y[i] > 0)) continue;
    const w = y[i] * y[i];
    sxx += w * (x[i] - mx) ** 2;
    sxy += w * (x[i] - mx) * (Math.log(y[i]) - my);
    count++;
  }
  const slope = sxy / sxx;
  let residual = 0;
  for (let i = from; i < to; i++) {
    if (y[i] > 0) residual += y[i] * y[i] * (Math.log(y[i]) - my - slope * (x[i] - mx)) ** 2;
  }
  const spread = count > 2 ? residual / (count - 2) : 0;
  return {
    slope,
    slopeError: Math.sqrt(spread / sxx),
    residual,
    middle: mx,
    centreError: Math.sqrt(spread / w0),
    at: (at) => my + slope * (at - mx),
  };
}
