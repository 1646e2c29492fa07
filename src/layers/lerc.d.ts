/** The part of the LERC decoder that is used; the package ships no types. */
declare module "lerc" {
  const Lerc: {
    decode(
      input: ArrayBufferLike,
      options: { readonly returnPixelInterleavedDims: boolean },
    ): {
      readonly pixels: readonly (Float32Array | Float64Array | Int32Array | Uint8Array)[];
      readonly mask: Uint8Array | null | undefined;
      readonly pixelType: string;
    };
  };
  export default Lerc;
}
