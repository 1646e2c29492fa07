import { expect, test } from "vitest";
// The tool that lists licences is a script of plain JavaScript.
import { licences } from "./tools/licences.mjs";

/** Licences under which a program may be passed on with no more than their text beside it. */
const FREE = new Set(
  "MIT ISC 0BSD BSD-2-Clause BSD-3-Clause Apache-2.0 BlueOak-1.0.0 BSL-1.0 CC0-1.0 Unlicense Zlib MPL-2.0".split(
    " ",
  ),
);
/** Packages whose licence is a text of their own, read by a person. */
const READ: Readonly<Record<string, string>> = {
  h5wasm: "NIST: free to copy, change and pass on with its notice; HDF5 within it BSD-like",
  "dejavu-fonts-ttf": "Bitstream Vera and Arev: free to copy, change and pass on, fonts not sold alone",
};

test("every package that a user installs has a licence that lets covey be passed on", () => {
  const all = licences();
  expect(all.length).toBeGreaterThan(100);
  const unknown = all.filter(
    ({ name, licence }: { readonly name: string; readonly licence: string }) =>
      READ[name] === undefined &&
      !licence
        .replaceAll(/[()]/g, "")
        .split(/ AND | OR /)
        .every((one) => FREE.has(one)),
  );
  expect(unknown).toEqual([]);
});
