const SUPERSCRIPT = "⁰¹²³⁴⁵⁶⁷⁸⁹";

/**
 * A number with 4 significant digits, the same everywhere on the page: trailing zeros kept, whole digits never cut
 * (12 345.6 is 12 346), a true minus sign, powers of ten below 0.0001 and from 10⁷. NaN is `–`.
 */
export function show(value: number): string {
  if (Number.isNaN(value)) return "–";
  if (value === 0) return "0";
  const sign = value < 0 ? "−" : "";
  const size = Math.abs(value);
  if (size === Number.POSITIVE_INFINITY) return `${sign}∞`;
  if (size < 1e-4 || size >= 1e7) {
    const [digits, power] = size.toExponential(3).split("e");
    return `${sign}${digits} × 10${raised(Number(power))}`;
  }
  return sign + grouped(size >= 1000 ? String(Math.round(size)) : size.toPrecision(4));
}

/** As `show`, without trailing zeros: for limits, shares and p, whose zeros say nothing. */
export function brief(value: number): string {
  const text = show(value);
  return text.includes("×") || !text.includes(".") ? text : text.replace(/\.?0+$/, "");
}

/** A count. */
export function whole(value: number): string {
  if (Number.isNaN(value)) return "–";
  return `${value < 0 ? "−" : ""}${grouped(String(Math.abs(Math.round(value))))}`;
}

/** A share as a percentage: `37.5 %`. */
export function percent(share: number): string {
  return Number.isNaN(share) ? "–" : `${brief(Number((100 * share).toFixed(1)))} %`;
}

/** `p` to 4 significant digits at most, never 0. */
export function pText(p: number): string {
  return Number.isNaN(p) ? "–" : p < 0.0001 ? "< 0.0001" : brief(p);
}

/** `1 interval`, `20 intervals`. */
export function counted(n: number, one: string, many = `${one}s`): string {
  return `${whole(n)} ${n === 1 ? one : many}`;
}

/** A coordinate in a drawing: hundredths of a pixel, so that equal pictures are equal bytes. */
export function px(value: number): string {
  return String(Math.round(value * 100) / 100);
}

function raised(power: number): string {
  const digits = Array.from(String(Math.abs(power)), (digit) => SUPERSCRIPT[Number(digit)]).join("");
  return (power < 0 ? "⁻" : "") + digits;
}

/** Narrow no-break spaces between thousands, from five digits on. */
function grouped(text: string): string {
  return text.length < 5 || text.includes(".") ? text : text.replace(/\B(?=(\d{3})+$)/g, "\u202F");
}

/** A sentence begins with a capital. */
export function sentence(text: string): string {
  return text.slice(0, 1).toUpperCase() + text.slice(1);
}
