import type { Remote } from "../../effects/effects.ts";
import { MachineError } from "../../errors.ts";

/** Times that a request is tried, and milliseconds before the second try; each further one waits twice as long. */
const TRIES = 4;
const FIRST_WAIT = 200;
const LONGEST = 60_000;

/**
 * Ranges of files over HTTP. Failures of the network, answers 408, 429 and 5xx are tried again. Throws MachineErrors
 * `network.no-ranges` (a server that sends whole files), `network.refused` (any other answer) and `network.failed`.
 */
export const nodeRemote: Remote = {
  range: async (address, from, length) => {
    let said = "";
    for (let attempt = 0; attempt < TRIES; attempt++) {
      if (attempt > 0) await pause(FIRST_WAIT * 2 ** (attempt - 1));
      try {
        const answer = await fetch(address, {
          headers: { range: `bytes=${from}-${from + length - 1}`, "accept-encoding": "identity" },
          signal: AbortSignal.timeout(LONGEST),
        });
        if (answer.status === 206) {
          const bytes = new Uint8Array(await answer.arrayBuffer());
          const size = Number(/\/(\d+)$/.exec(answer.headers.get("content-range") ?? "")?.[1] ?? Number.NaN);
          if (!Number.isFinite(size)) throw failure("no-ranges", "an answer without its size", address);
          const mark = answer.headers.get("etag") ?? answer.headers.get("last-modified") ?? "";
          return { bytes, size, version: `${size} ${mark}` };
        }
        // The body is not wanted: a server that ignores ranges would send all of it.
        await answer.body?.cancel();
        if (answer.status === 200) throw failure("no-ranges", "the whole file", address);
        said = `${answer.status} ${answer.statusText}`.trim();
        if (answer.status !== 408 && answer.status !== 429 && answer.status < 500)
          throw failure("refused", said, address);
      } catch (error) {
        if (error instanceof MachineError) throw error;
        const cause = error instanceof Error && error.cause instanceof Error ? error.cause : error;
        said = cause instanceof Error ? cause.message : String(cause);
      }
    }
    throw failure("failed", `${said} after ${TRIES} tries`, address);
  },
};

/** The error of a file that is another one in the middle of a run. */
export function changedAtAddress(address: string): MachineError {
  return new MachineError({
    name: "network.changed",
    expected: "the file at the address to stay as it is while it is read",
    found: "another version of it",
    where: { file: address },
    remedy: "run the same command again",
  });
}

function pause(milliseconds: number): Promise<void> {
  return new Promise((resolve) => setTimeout(resolve, milliseconds));
}

function failure(what: "no-ranges" | "refused" | "failed", found: string, address: string): MachineError {
  return new MachineError({
    name: `network.${what}`,
    expected: "a part of the file (HTTP range request, RFC 9110 §14)",
    found,
    where: { file: address },
    remedy:
      what === "no-ranges"
        ? "download the file below the data folder; this server does not send parts"
        : "check the address and the network, and run the same command again",
  });
}
