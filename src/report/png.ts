import { encode } from "fast-png";

/** RGBA pixels, row 0 on top, as a PNG in a data URI. */
export function pngUri(width: number, height: number, rgba: Uint8Array): string {
  const file = encode({ width, height, data: rgba, channels: 4, depth: 8 }, { zlib: { level: 9 } });
  return `data:image/png;base64,${Buffer.from(file).toString("base64")}`;
}
