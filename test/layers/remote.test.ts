import { createServer, type RequestListener, type Server } from "node:http";
import type { AddressInfo } from "node:net";
import { afterEach, describe, expect, test } from "vitest";
import { MachineError } from "../../src/errors.ts";
import { extractLayers } from "../../src/layers/extract.ts";
import type { LayerOptions } from "../../src/layers/options.ts";
import { planLayers } from "../../src/layers/plan.ts";
import { nodeRemote } from "../../src/pipeline/effects/remote.ts";
import { recording } from "../../src/pipeline/inputs.ts";
import { effectsOf, madeTiff } from "./effects.ts";

const TILE = 64 * 64 * 4;
const tiles = Array.from(
  { length: 16 },
  (_, i) => new Uint8Array(Float32Array.from({ length: 64 * 64 }, (_v, at) => i + at / 4096).buffer),
);
const TIF = madeTiff(
  {
    256: [256],
    257: [256],
    258: [32],
    259: [1],
    277: [1],
    322: [64],
    323: [64],
    324: [],
    325: tiles.map(() => TILE),
    339: [3],
    33550: [1 / 64, 1 / 64, 0],
    33922: [0, 0, 0, 8, 52, 0],
  },
  tiles,
);

const servers: Server[] = [];
afterEach(() => {
  for (const one of servers.splice(0)) one.close();
});
async function serve(answer: RequestListener): Promise<string> {
  const server = createServer(answer);
  servers.push(server);
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  return `http://127.0.0.1:${(server.address() as AddressInfo).port}/green_2001_05.tif`;
}
/** Sends ranges of the file and counts bytes and requests; may do something else with the nth request. */
function ranges(
  file: Uint8Array,
  sent: { bytes: number; requests: number },
  other?: RequestListener,
): RequestListener {
  return (request, response) => {
    sent.requests++;
    if (other !== undefined && sent.requests === 1) return other(request, response);
    const [, from, to] = /bytes=(\d+)-(\d+)/.exec(request.headers.range ?? "") ?? [];
    const part = file.subarray(Number(from), Number(to) + 1);
    sent.bytes += part.length;
    response.writeHead(206, {
      "content-range": `bytes ${from}-${Number(from) + part.length - 1}/${file.length}`,
      etag: '"a"',
    });
    response.end(part);
  };
}
const optionsOf = (address: string): LayerOptions => ({
  files: [address],
  date: { name: "green_{yyyy}_{MM}" },
  covers: "month",
  unit: "1",
  kind: "mean",
  system: "EPSG:4326",
  network: "allow",
});
const read = (address: string, options: Partial<LayerOptions> = {}) => {
  const effects = effectsOf({});
  const position = [8 + 70.5 / 64, 52 - 0.5 / 64] as const;
  return extractLayers(
    "green",
    { ...optionsOf(address), ...options },
    [{ place: { type: "point", name: "here", position }, use: { by: "nearest" } }],
    { ...effects, files: { ...effects.files, remote: nodeRemote } },
  );
};
const nameOf = async (work: Promise<unknown>) =>
  work.then(
    () => "nothing was thrown",
    (error: unknown) => (error instanceof MachineError ? error.facts.name : error),
  );

describe("a GeoTIFF at an address, read from a server of our own", () => {
  test("the header and the one block that is needed are sent, and no byte more", async () => {
    const sent = { bytes: 0, requests: 0 };
    const { series } = await read(await serve(ranges(TIF, sent)));
    expect(series[0].values[0]).toBe(Math.fround(1 + 6 / 4096)); // second tile, seventh sample
    expect(sent).toEqual({ bytes: 16384 + TILE, requests: 2 });
  });
  test("a plan reads the header alone", async () => {
    const sent = { bytes: 0, requests: 0 };
    const files = { ...effectsOf({}).files, remote: nodeRemote };
    const plan = await planLayers("green", optionsOf(await serve(ranges(TIF, sent))), files);
    expect(plan.files[0]).toMatchObject({ bytes: TIF.length, width: 256 });
    expect(sent).toEqual({ bytes: 16384, requests: 1 });
  });
  test("without leave nothing is asked of the network", async () => {
    const sent = { bytes: 0, requests: 0 };
    const address = await serve(ranges(TIF, sent));
    const { network: _, ...options } = optionsOf(address);
    await expect(extractLayers("green", options, [], effectsOf({}))).rejects.toMatchObject({
      facts: { name: "layers.network" },
    });
    expect(sent.requests).toBe(0);
  });
  test.each([
    ["busy", 503],
    ["too many", 429],
  ])("a server that is %s is asked again", async (_word, status) => {
    const sent = { bytes: 0, requests: 0 };
    const busy: RequestListener = (_request, response) => response.writeHead(status).end();
    await read(await serve(ranges(TIF, sent, busy)));
    expect(sent).toEqual({ bytes: 16384 + TILE, requests: 3 });
  });
  test("a broken connection is tried again", async () => {
    const sent = { bytes: 0, requests: 0 };
    await read(await serve(ranges(TIF, sent, (request) => request.socket.destroy())));
    expect(sent.requests).toBe(3);
  });
  test("other answers are an error that names the address", async () => {
    const missing = await serve((_request, response) => response.writeHead(404).end());
    expect(await nameOf(read(missing))).toBe("network.refused");
    await expect(read(missing)).rejects.toThrow(missing);
    const whole = await serve((_request, response) => response.writeHead(200).end(TIF));
    expect(await nameOf(read(whole))).toBe("network.no-ranges");
    const never = await serve((_request, response) => response.writeHead(500).end());
    expect(await nameOf(read(never))).toBe("network.failed");
  });
  test("a file that changes in between is an error", async () => {
    let n = 0;
    const address = await serve((request, response) => {
      const [, from, to] = /bytes=(\d+)-(\d+)/.exec(request.headers.range ?? "") ?? [];
      const part = TIF.subarray(Number(from), Number(to) + 1);
      response.writeHead(206, { "content-range": `bytes ${from}-${to}/${TIF.length}`, etag: `"${n++}"` });
      response.end(part);
    });
    expect(await nameOf(read(address))).toBe("network.changed");
  });
  test("NetCDF files and quality numbers at addresses are refused by name", async () => {
    const sent = { bytes: 0, requests: 0 };
    const address = await serve(ranges(new TextEncoder().encode(`CDF\x01${"-".repeat(60)}`), sent));
    await expect(read(address)).rejects.toMatchObject({ facts: { name: "layers.netcdf-address" } });
    const files = { ...effectsOf({}).files, remote: nodeRemote };
    await expect(planLayers("green", optionsOf(address), files)).rejects.toMatchObject({
      facts: { name: "layers.netcdf-address" },
    });
    const asked = sent.requests;
    const refused = { facts: { name: "layers.quality-address", found: `the address "${address}"` } };
    await expect(read(address, { quality: { pass: [{ values: [0] }] } })).rejects.toMatchObject(refused);
    const own = { files: ["green_2001_05.tif"], quality: { files: [address], pass: [{ values: [0] }] } };
    await expect(read(address, own)).rejects.toMatchObject(refused);
    expect(sent.requests).toBe(asked);
  });
  test("a run remembers address, size and version, and refuses a second version", async () => {
    const versions = ['"a"', '"a"', '"b"'];
    const address = await serve((request, response) => {
      const [, from, to] = /bytes=(\d+)-(\d+)/.exec(request.headers.range ?? "") ?? [];
      const part = TIF.subarray(Number(from), Number(to) + 1);
      const range = `bytes ${from}-${to}/${TIF.length}`;
      response.writeHead(206, { "content-range": range, etag: versions.shift() }).end(part);
    });
    const { files, identities } = recording({ ...effectsOf({}).files, remote: nodeRemote }, () => "");
    await files.remote?.range(address, 0, 100);
    await files.remote?.range(address, 100, 100);
    expect(await identities()).toEqual([
      { path: address, bytes: TIF.length, sha256: "not known: read in parts", version: `${TIF.length} "a"` },
    ]);
    await expect(files.remote?.range(address, 0, 100)).rejects.toMatchObject({
      facts: { name: "network.changed" },
    });
  });
  test("a file that is cut off is an error", async () => {
    const cut = TIF.subarray(0, TIF.length - 15 * TILE);
    const sent = { bytes: 0, requests: 0 };
    await expect(read(await serve(ranges(cut, sent)))).rejects.toMatchObject({ tag: expect.any(String) });
  });
});
