/** Sums of one pass; the mean is taken about the first value, so that large offsets cost no digits. */
export class Tally {
  private count = 0;
  private missing = 0;
  private first = 0;
  private sum = 0;
  private least = Number.POSITIVE_INFINITY;
  private greatest = Number.NEGATIVE_INFINITY;

  add(value: number): void {
    this.count++;
    if (Number.isNaN(value)) {
      this.missing++;
      return;
    }
    if (this.missing === this.count - 1) this.first = value;
    this.sum += value - this.first;
    if (value < this.least) this.least = value;
    if (value > this.greatest) this.greatest = value;
  }

  result() {
    const valid = this.count - this.missing;
    return {
      missingShare: this.missing / this.count,
      least: valid > 0 ? this.least : Number.NaN,
      mean: valid > 0 ? this.first + this.sum / valid : Number.NaN,
      greatest: valid > 0 ? this.greatest : Number.NaN,
    };
  }
}
