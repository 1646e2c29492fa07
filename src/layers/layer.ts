import type { Files, RandomAccess } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { Affine, Grid } from "./grid.ts";
import { brokenFile, type Directory, readStructure } from "./ifd.ts";
import { describeImage, type Image } from "./image.ts";
import { type GeoKeys, readKeys } from "./keys.ts";
import { type BandMetadata, readBandItems, readSideXml } from "./metadata.ts";
import { nodataAsStored, parseNodata } from "./missing.ts";
import { NO_SIDE, type SidePaths } from "./side.ts";

/** A GeoTIFF's headers, side files included; no block has been read. */
export interface Layer {
  readonly path: string;
  readonly image: Image;
  readonly grid: Grid;
  readonly keys: GeoKeys;
  readonly wkt: string | undefined;
  /** Per band, as the samples hold it; undefined for none. */
  readonly nodata: readonly (number | undefined)[];
  /** As the file spells it. */
  readonly nodataText: string | undefined;
  readonly bands: readonly BandMetadata[];
  /** A mask within the file or in NAME.msk: 0 is missing. */
  readonly mask: { readonly image: Image; readonly path: string } | undefined;
  /** Reduced images, largest first. */
  readonly overviews: readonly Image[];
}

/** Reads the headers through an open file. The side files named are read too. */
export async function describeLayer(
  file: RandomAccess,
  files: Files,
  side: SidePaths = NO_SIDE,
): Promise<Layer> {
  const { path } = file;
  const { directories, littleEndian } = readStructure(file);
  const [first, ...others] = directories;
  const image = describeImage(first, littleEndian, path);
  const kindOf = (directory: Directory) => directory.number(254, 0);
  const size = (directory: Directory) => `${directory.number(256, 0)} × ${directory.number(257, 0)}`;
  if (others.some((one) => (kindOf(one) & 5) === 0 && size(one) === size(first)))
    throw new InputError({
      name: "layers.unsupported-pages",
      expected: "one image with bands",
      found: `${directories.length} images (pages) in one file`,
      where: { file: path },
      remedy: "write the pages as files of their own, or as bands of one image",
    });
  const said =
    side.metadata === undefined ? undefined : readSideXml(await files.readText(side.metadata), image.bands);
  const written = readBandItems(first.text(42112) ?? "", image.bands);
  const keys = readKeys(first, path);
  const affine =
    (said?.transform === undefined ? undefined : fromGdalOrder(said.transform)) ??
    affineOf(first, keys, path) ??
    (side.world === undefined ? undefined : fromWorldFile(await files.readText(side.world), side.world));
  if (affine === undefined)
    throw new InputError({
      name: "layers.no-georeference",
      expected: "tags (or a world file) that say where the image lies",
      found: "none",
      where: { file: path },
      remedy: "put the world file (.tfw) beside the image, or use the provider's GeoTIFF",
    });
  if (
    !(Math.abs(affine.a * affine.e - affine.b * affine.d) > 0) ||
    !Object.values(affine).every(Number.isFinite)
  )
    throw brokenFile(path, "pixels without size", "tags that say where the image lies");
  const nodataText = first.text(42113);
  const nodata = Array.from({ length: image.bands }, (_, band) =>
    nodataAsStored(parseNodata(said?.nodata[band] ?? nodataText), image.type),
  );
  const bands = Array.from({ length: image.bands }, (_, band) => ({
    description: "",
    unit: "",
    scale: 1,
    offset: 0,
    ...written[band],
    ...said?.bands[band],
  }));
  const overviews = others
    .filter((one) => (kindOf(one) & 5) === 1)
    .map((one) => describeImage(one, littleEndian, path))
    .filter((one) => one.bands === image.bands && one.type === image.type)
    .sort((p, q) => q.width - p.width);
  return {
    path,
    image,
    grid: { width: image.width, height: image.height, affine },
    keys,
    wkt: said?.wkt,
    nodata,
    nodataText: said?.nodata[0] ?? nodataText,
    bands,
    mask: maskOf(others, image, littleEndian, files, side, path),
    overviews,
  };
}

function maskOf(
  others: readonly Directory[],
  image: Image,
  littleEndian: boolean,
  files: Files,
  side: SidePaths,
  path: string,
): Layer["mask"] {
  const check = (mask: Image, where: string) => {
    if (mask.width !== image.width || mask.height !== image.height)
      throw brokenFile(
        where,
        `a mask of ${mask.width} × ${mask.height} pixels`,
        "a mask of the image's size",
      );
    return { image: mask, path: where };
  };
  const inner = others.find((one) => (one.number(254, 0) & 5) === 4);
  if (inner !== undefined) return check(describeImage(inner, littleEndian, path), path);
  if (side.mask === undefined) return undefined;
  const file = files.open(side.mask);
  try {
    const { directories, littleEndian: little } = readStructure(file);
    return check(describeImage(directories[0], little, side.mask), side.mask);
  } finally {
    file.close();
  }
}

/**
 * The affine mapping from tags (GeoTIFF 1.1 §7.3): pixel scale and one tie point, or the transformation matrix. With
 * key 1025 = 2 (PixelIsPoint) the tie point is a pixel's centre, so the corner lies half a pixel back.
 */
function affineOf(directory: Directory, keys: GeoKeys, path: string): Affine | undefined {
  const scale = directory.numbers(33550);
  const ties = directory.numbers(33922);
  const matrix = directory.numbers(34264);
  let corner: Affine;
  if (scale !== undefined && scale.length >= 2 && scale[0] !== 0 && ties !== undefined && ties.length >= 6) {
    // A negative scale is read as its size, as GDAL does: writers that mean south-up use the matrix.
    const [a, e] = [scale[0], -Math.abs(scale[1])];
    corner = { x0: ties[3] - ties[0] * a, a, b: 0, y0: ties[4] - ties[1] * e, d: 0, e };
  } else if (matrix !== undefined && matrix.length === 16) {
    const [a, b, , x0, d, e, , y0] = matrix;
    corner = { x0, a, b, y0, d, e };
  } else {
    if (ties === undefined || ties.length === 0) return undefined;
    throw new InputError({
      name: "layers.unsupported-georeference",
      expected: "a pixel size and corner, or a transformation matrix",
      found: `${Math.floor(ties.length / 6)} control points`,
      where: { file: path },
      remedy: "warp the image to a grid first, e.g. gdalwarp",
    });
  }
  if (keys.numbers.get(1025) !== 2) return corner;
  return halfBack(corner);
}

function halfBack(grid: Affine): Affine {
  return { ...grid, x0: grid.x0 - (grid.a + grid.b) / 2, y0: grid.y0 - (grid.d + grid.e) / 2 };
}

function fromGdalOrder([x0, a, b, y0, d, e]: readonly number[]): Affine {
  return { x0, a, b, y0, d, e };
}

/** A world file: six lines a, d, b, e and the centre of the first pixel. */
function fromWorldFile(text: string, path: string): Affine {
  const numbers = text.trim().split(/\s+/).map(Number);
  if (numbers.length < 6 || !numbers.slice(0, 6).every(Number.isFinite))
    throw brokenFile(path, JSON.stringify(text.slice(0, 60)), "six numbers, one a line");
  const [a, d, b, e, x, y] = numbers;
  return halfBack({ x0: x, a, b, y0: y, d, e });
}
