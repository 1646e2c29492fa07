/** What a station and one neighbour have in common, enough to leave any one period out again. */
export interface Common {
  readonly count: number;
  readonly meanX: number;
  readonly meanY: number;
  readonly sxx: number;
  readonly sxy: number;
  readonly syy: number;
}

/** Moments of the periods in which both the neighbour (x) and the station (y) have a value. */
export function commonOf(x: Float64Array, y: Float64Array): Common {
  let [count, sumX, sumY] = [0, 0, 0];
  for (let i = 0; i < x.length; i++)
    if (!Number.isNaN(x[i] + y[i])) {
      count++;
      sumX += x[i];
      sumY += y[i];
    }
  const [meanX, meanY] = [sumX / count, sumY / count];
  let [sxx, sxy, syy] = [0, 0, 0];
  for (let i = 0; i < x.length; i++)
    if (!Number.isNaN(x[i] + y[i])) {
      sxx += (x[i] - meanX) ** 2;
      sxy += (x[i] - meanX) * (y[i] - meanY);
      syy += (y[i] - meanY) ** 2;
    }
  return { count, meanX, meanY, sxx, sxy, syy };
}

/** Pearson's r; NaN where either is constant. */
export function correlation({ sxx, sxy, syy }: Common): number {
  return sxy / Math.sqrt(sxx * syy);
}

/** The same moments without one period (x, y): sums of squares by the updating formula of Welford (1962), backwards. */
export function without(c: Common, x: number, y: number): Common {
  const count = c.count - 1;
  const meanX = c.meanX - (x - c.meanX) / count;
  const meanY = c.meanY - (y - c.meanY) / count;
  return {
    count,
    meanX,
    meanY,
    sxx: c.sxx - (x - c.meanX) * (x - meanX),
    sxy: c.sxy - (x - c.meanX) * (y - meanY),
    syy: c.syy - (y - c.meanY) * (y - meanY),
  };
}

/** Least-squares prediction of the station from the neighbour's value x. */
export function regressed({ meanX, meanY, sxx, sxy }: Common, x: number): number {
  return meanY + (sxy / sxx) * (x - meanX);
}

/** The neighbour's value x times the ratio of normals N_station / N_neighbour over what both have. */
export function ratioed({ meanX, meanY }: Common, x: number): number {
  return (meanY / meanX) * x;
}
