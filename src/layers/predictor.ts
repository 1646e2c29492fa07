/**
 * Undoes horizontal differencing (TIFF 6.0 §14) in place: each sample was stored as its difference, modulo 2^bits,
 * from the sample `step` places before it in the row. Bytes are in the host's order.
 */
export function undoDifferences(bytes: Uint8Array, rowBytes: number, size: number, step: number): void {
  const { buffer, byteOffset, byteLength } = bytes;
  if (size === 8) {
    undoWide(bytes, rowBytes, step);
    return;
  }
  const lanes =
    size === 1
      ? bytes
      : size === 2
        ? new Uint16Array(buffer, byteOffset, byteLength >> 1)
        : new Uint32Array(buffer, byteOffset, byteLength >> 2);
  const perRow = rowBytes / size;
  for (let row = 0; row + perRow <= lanes.length; row += perRow)
    for (let i = row + step; i < row + perRow; i++) lanes[i] += lanes[i - step];
}

function undoWide(bytes: Uint8Array, rowBytes: number, step: number): void {
  const lanes = new BigUint64Array(bytes.buffer, bytes.byteOffset, bytes.byteLength >> 3);
  const perRow = rowBytes / 8;
  for (let row = 0; row + perRow <= lanes.length; row += perRow)
    for (let i = row + step; i < row + perRow; i++) lanes[i] += lanes[i - step];
}

/**
 * Undoes the floating-point predictor (Adobe TIFF Technical Note 3): each row was split into planes, the most
 * significant byte first whatever the file's order, and the bytes differenced. Leaves values in the host's order.
 */
export function undoFloatPlanes(
  bytes: Uint8Array,
  rowBytes: number,
  size: number,
  step: number,
  hostLittle: boolean,
): void {
  const perRow = rowBytes / size;
  const held = new Uint8Array(rowBytes);
  for (let row = 0; row + rowBytes <= bytes.length; row += rowBytes) {
    for (let i = row + step; i < row + rowBytes; i++) bytes[i] += bytes[i - step];
    held.set(bytes.subarray(row, row + rowBytes));
    for (let plane = 0; plane < size; plane++) {
      const place = row + (hostLittle ? size - 1 - plane : plane);
      const from = plane * perRow;
      for (let i = 0; i < perRow; i++) bytes[place + i * size] = held[from + i];
    }
  }
}
