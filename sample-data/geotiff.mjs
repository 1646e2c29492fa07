import { deflateSync } from "node:zlib";

// A minimal GeoTIFF 1.1 writer for one small band: little-endian, one deflate strip, horizontal differencing.

const TYPE_BYTES = { 2: 1, 3: 2, 4: 4, 12: 8 };

/**
 * The bytes of a GeoTIFF.
 * @param {object} image
 * @param {number} image.width columns
 * @param {number} image.height rows
 * @param {Int16Array | Uint8Array} image.values row-major from the north-west corner
 * @param {number} image.west easting of the outer corner, metres
 * @param {number} image.north northing of the outer corner, metres
 * @param {number} image.pixel edge of a pixel, metres
 * @param {number} image.epsg a projected coordinate system
 * @param {number} image.nodata raw value that means missing (GDAL_NODATA, tag 42113)
 * @param {number} [image.scale] value = raw × scale (GDAL_METADATA, tag 42112)
 * @param {string} image.description of the band
 */
export function geotiff(image) {
  const { width, height, values } = image;
  const sampleBytes = values.BYTES_PER_ELEMENT;
  const signed = values instanceof Int16Array;
  const strip = deflateSync(differenced(values, width, height), { level: 9 });
  const items = [`<Item name="DESCRIPTION" sample="0" role="description">${image.description}</Item>`];
  if (image.scale !== undefined)
    items.push(
      `<Item name="OFFSET" sample="0" role="offset">0</Item>`,
      `<Item name="SCALE" sample="0" role="scale">${image.scale}</Item>`,
    );
  // Key 1024 = 1 projected; 1025 = 1 a pixel is an area; 3072 the system's EPSG number.
  const geoKeys = [1, 1, 1, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, image.epsg];
  /** @type {[number, number, number[] | string][]} */
  const tags = [
    [256, 3, [width]],
    [257, 3, [height]],
    [258, 3, [8 * sampleBytes]],
    [259, 3, [8]], // deflate
    [262, 3, [1]], // black is zero
    [273, 4, [0]], // the strip's offset, set below
    [277, 3, [1]],
    [278, 3, [height]],
    [279, 4, [strip.length]],
    [317, 3, [2]], // horizontal differencing
    [339, 3, [signed ? 2 : 1]],
    [33550, 12, [image.pixel, image.pixel, 0]],
    [33922, 12, [0, 0, 0, image.west, image.north, 0]],
    [34735, 3, geoKeys],
    [42112, 2, `<GDALMetadata>${items.join("")}</GDALMetadata>`],
    [42113, 2, String(image.nodata)],
  ];
  const sizeOf = ([, type, value]) =>
    typeof value === "string" ? value.length + 1 : value.length * TYPE_BYTES[type];
  const even = (n) => n + (n % 2);
  const directory = 8;
  let next = directory + 2 + 12 * tags.length + 4;
  const outside = tags.map((tag) => {
    if (sizeOf(tag) <= 4) return 0;
    const at = next;
    next = even(at + sizeOf(tag));
    return at;
  });
  tags.find(([id]) => id === 273)[2] = [next];
  const out = Buffer.alloc(next + strip.length);
  out.write("II", 0, "latin1");
  out.writeUInt16LE(42, 2);
  out.writeUInt32LE(directory, 4);
  out.writeUInt16LE(tags.length, directory);
  tags.forEach((tag, i) => {
    const [id, type, value] = tag;
    const entry = directory + 2 + 12 * i;
    out.writeUInt16LE(id, entry);
    out.writeUInt16LE(type, entry + 2);
    out.writeUInt32LE(typeof value === "string" ? value.length + 1 : value.length, entry + 4);
    if (outside[i] > 0) out.writeUInt32LE(outside[i], entry + 8);
    write(out, outside[i] > 0 ? outside[i] : entry + 8, type, value);
  });
  strip.copy(out, next);
  return out;
}

/** Each sample less the one before it in the row, modulo the sample's size (TIFF 6.0, section 14). */
function differenced(values, width, height) {
  const out = values.slice();
  for (let row = 0; row < height; row++)
    for (let column = width - 1; column > 0; column--) {
      const at = row * width + column;
      out[at] = values[at] - values[at - 1];
    }
  return Buffer.from(out.buffer, out.byteOffset, out.byteLength);
}

function write(out, at, type, value) {
  if (typeof value === "string") {
    out.write(value, at, "latin1");
    return;
  }
  value.forEach((number, i) => {
    if (type === 3) out.writeUInt16LE(number, at + 2 * i);
    if (type === 4) out.writeUInt32LE(number, at + 4 * i);
    if (type === 12) out.writeDoubleLE(number, at + 8 * i);
  });
}
