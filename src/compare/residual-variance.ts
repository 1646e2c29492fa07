/**
 * Variance between years that predictions leave unexplained, by the moment equation of Paule & Mandel (1982, J. Res. Natl
 * Bur. Stand. 87:377–385): the σ² ≥ 0 at which Σ_t e_t²/(v_t + σ²/Δ_t) equals the degrees of freedom, 0 where it is
 * below them already. `errors` on the logit scale, `variances` their sampling variances, `lengths` Δ in years.
 */
export function residualVariance(
  errors: ArrayLike<number>,
  variances: ArrayLike<number>,
  lengths: ArrayLike<number>,
  freedom: number,
): number {
  const wanted = Math.max(1, freedom);
  const sum = (variance: number) => {
    let total = 0;
    for (let t = 0; t < errors.length; t++) total += errors[t] ** 2 / (variances[t] + variance / lengths[t]);
    return total;
  };
  if (sum(0) <= wanted) return 0;
  let high = 1;
  while (sum(high) > wanted) high *= 4;
  let low = 0;
  // the sum falls as the variance grows, so halving cannot miss; 200 halvings are exact to rounding
  for (let i = 0; i < 200 && high - low > 1e-15 * high; i++) {
    const middle = (low + high) / 2;
    if (sum(middle) > wanted) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
