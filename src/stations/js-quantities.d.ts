/** The part of js-quantities that covey uses; the package ships no types. */
declare module "js-quantities" {
  interface Quantity {
    isCompatible(other: Quantity): boolean;
    to(unit: Quantity): Quantity;
    readonly scalar: number;
  }
  /** Throws its own error for text that is no unit. */
  function Qty(text: string): Quantity;
  export default Qty;
}
