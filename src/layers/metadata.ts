/** What a file says of one band. */
export interface BandMetadata {
  readonly description: string;
  readonly unit: string;
  readonly scale: number;
  readonly offset: number;
}

/** Metadata of a band as written; what is not there is undefined. */
export type WrittenBand = {
  readonly [Key in keyof BandMetadata]?: BandMetadata[Key];
};

const ENTITIES: Readonly<Record<string, string>> = { lt: "<", gt: ">", amp: "&", quot: '"', apos: "'" };

/** Undoes XML's five named entities and numeric ones. */
export function unescapeXml(text: string): string {
  return text.replace(/&(#x?[0-9a-fA-F]+|[a-z]+);/g, (whole, name: string) => {
    if (!name.startsWith("#")) return ENTITIES[name] ?? whole;
    const code = name.startsWith("#x")
      ? Number.parseInt(name.slice(2), 16)
      : Number.parseInt(name.slice(1), 10);
    return code <= 0x10ffff ? String.fromCodePoint(code) : whole;
  });
}

const ROLES: Readonly<Record<string, keyof BandMetadata>> = {
  scale: "scale",
  offset: "offset",
  description: "description",
  unittype: "unit",
};

/**
 * Reads tag 42112 (GDAL_METADATA): items with a `sample` (band, from 0) and a `role`. Texts are escaped twice, once
 * as values and once as XML.
 */
export function readBandItems(xml: string, bands: number): readonly WrittenBand[] {
  const out: { -readonly [Key in keyof BandMetadata]?: BandMetadata[Key] }[] = Array.from(
    { length: bands },
    () => ({}),
  );
  for (const [, attributes, content] of xml.matchAll(/<Item\b([^>]*)>([^<]*)<\/Item>/g)) {
    const key = ROLES[attribute(attributes, "role") ?? ""];
    const sample = Number(attribute(attributes, "sample") ?? Number.NaN);
    if (key === undefined || !(sample >= 0 && sample < bands)) continue;
    setPart(out[sample], key, unescapeXml(unescapeXml(content)));
  }
  return out;
}

/** What the side file NAME.aux.xml says: per band, and of where the layer lies. */
export interface SideMetadata {
  readonly bands: readonly WrittenBand[];
  readonly nodata: readonly (string | undefined)[];
  /** x0, a, b, y0, d, e as text has them. */
  readonly transform: readonly number[] | undefined;
  readonly wkt: string | undefined;
}

/** Reads a PAM side file (NAME.aux.xml): bands count from 1, texts are escaped once. */
export function readSideXml(xml: string, bands: number): SideMetadata {
  const out: { -readonly [Key in keyof BandMetadata]?: BandMetadata[Key] }[] = Array.from(
    { length: bands },
    () => ({}),
  );
  const nodata: (string | undefined)[] = new Array(bands).fill(undefined);
  for (const [, attributes, content] of xml.matchAll(
    /<PAMRasterBand\b([^>]*)>([\s\S]*?)<\/PAMRasterBand>/g,
  )) {
    const band = Number(attribute(attributes, "band") ?? Number.NaN) - 1;
    if (!(band >= 0 && band < bands)) continue;
    nodata[band] = element(content, "NoDataValue");
    for (const [tag, key] of [
      ["Scale", "scale"],
      ["Offset", "offset"],
      ["Description", "description"],
      ["UnitType", "unit"],
    ] as const) {
      const text = element(content, tag);
      if (text !== undefined) setPart(out[band], key, unescapeXml(text));
    }
  }
  const top = xml.replace(/<PAMRasterBand\b[\s\S]*?<\/PAMRasterBand>/g, "");
  const numbers = element(top, "GeoTransform")?.split(",").map(Number);
  const transform = numbers?.length === 6 && numbers.every(Number.isFinite) ? numbers : undefined;
  const wkt = element(top, "SRS");
  return { bands: out, nodata, transform, wkt: wkt === undefined ? undefined : unescapeXml(wkt) };
}

function setPart(
  band: { -readonly [Key in keyof BandMetadata]?: BandMetadata[Key] },
  key: keyof BandMetadata,
  text: string,
): void {
  if (key === "description" || key === "unit") band[key] = text;
  else {
    const value = Number(text);
    if (text.trim() !== "" && Number.isFinite(value)) band[key] = value;
  }
}

function attribute(attributes: string, name: string): string | undefined {
  return new RegExp(`\\b${name}\\s*=\\s*"([^"]*)"`).exec(attributes)?.[1];
}

function element(xml: string, name: string): string | undefined {
  return new RegExp(`<${name}\\b[^>]*>([^<]*)</${name}>`).exec(xml)?.[1].trim();
}
