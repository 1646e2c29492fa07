/** The sample types that are read. */
export type SampleType =
  | "int8"
  | "uint8"
  | "int16"
  | "uint16"
  | "int32"
  | "uint32"
  | "float16"
  | "float32"
  | "float64";

/** Decoded samples; float16 is widened to float32, which holds it exactly. */
export type Samples =
  | Int8Array
  | Uint8Array
  | Int16Array
  | Uint16Array
  | Int32Array
  | Uint32Array
  | Float32Array
  | Float64Array;

export const SAMPLE_BYTES: Readonly<Record<SampleType, number>> = {
  int8: 1,
  uint8: 1,
  int16: 2,
  uint16: 2,
  int32: 4,
  uint32: 4,
  float16: 2,
  float32: 4,
  float64: 8,
};

/** True on machines that keep the low byte first, as all common ones do. */
export const HOST_LITTLE = new Uint8Array(Uint16Array.of(1).buffer)[0] === 1;

/** Turns the byte order of every value of `size` bytes, in place. */
export function swapBytes(bytes: Uint8Array, size: number): void {
  const whole = bytes.length - (bytes.length % size);
  const view = Buffer.from(bytes.buffer, bytes.byteOffset, whole);
  if (size === 2) view.swap16();
  else if (size === 4) view.swap32();
  else if (size === 8) view.swap64();
}

/** Bytes in the host's order as samples; copies only where the bytes do not lie on a boundary. */
export function samplesOf(bytes: Uint8Array, type: SampleType): Samples {
  const size = SAMPLE_BYTES[type];
  const whole = bytes.byteOffset % size === 0 ? bytes : new Uint8Array(bytes);
  const { buffer, byteOffset } = whole;
  const count = Math.floor(whole.byteLength / size);
  switch (type) {
    case "int8":
      return new Int8Array(buffer, byteOffset, count);
    case "uint8":
      return new Uint8Array(buffer, byteOffset, count);
    case "int16":
      return new Int16Array(buffer, byteOffset, count);
    case "uint16":
      return new Uint16Array(buffer, byteOffset, count);
    case "int32":
      return new Int32Array(buffer, byteOffset, count);
    case "uint32":
      return new Uint32Array(buffer, byteOffset, count);
    case "float16":
      return Float32Array.from(new Uint16Array(buffer, byteOffset, count), fromHalf);
    case "float32":
      return new Float32Array(buffer, byteOffset, count);
    case "float64":
      return new Float64Array(buffer, byteOffset, count);
  }
}

/** IEEE 754 binary16 → number: sign, 5 bits of exponent (bias 15), 10 of fraction. */
export function fromHalf(half: number): number {
  const sign = half & 0x8000 ? -1 : 1;
  const exponent = (half >> 10) & 0x1f;
  const fraction = half & 0x3ff;
  if (exponent === 0) return sign * fraction * 2 ** -24;
  if (exponent === 31) return fraction === 0 ? sign * Number.POSITIVE_INFINITY : Number.NaN;
  return sign * (1024 + fraction) * 2 ** (exponent - 25);
}
