import { nodeDisk } from "../pipeline/effects.ts";
import { recoverOutput } from "../publish/folder.ts";
import { type Departure, type Verification, verifyOutput } from "../publish/verify.ts";
import { plain } from "../terminal/style.ts";
import type { Lines, Terminal } from "./io.ts";

/** What `verify` has to say, and whether the folder is as its run left it. */
export interface Verified {
  readonly lines: Lines;
  readonly ok: boolean;
}

/**
 * `covey verify FOLDER`: every file of an output folder against its run record. A swap that was interrupted is first
 * brought to an end, as `run` would. Throws `publish.record-missing` and `publish.record-unreadable`.
 */
export function verifyCommand(
  folder: string,
  options: { readonly json: boolean },
  { style }: Pick<Terminal, "style">,
): Verified {
  const disk = nodeDisk();
  const recovery = recoverOutput(disk, folder);
  const found = verifyOutput(disk, folder);
  if (options.json) return { lines: [JSON.stringify({ ...found, recovery }, null, 2)], ok: found.ok };
  const ended = recovery === "nothing" ? [] : [`an interrupted run beside the folder was ${recovery} first`];
  return { lines: [...ended, ...verificationLines(found, style.good, style.alarm)], ok: found.ok };
}

function verificationLines(
  { ok, recorded, record, departures }: Verification,
  good: (text: string) => string,
  bad: (text: string) => string,
): Lines {
  const files = `${recorded} recorded file${recorded === 1 ? "" : "s"}`;
  // Whoever noted it elsewhere can tell whether the record itself was changed.
  if (ok) return [good(`${files}, all as the run left them`), `the record itself: sha256 ${record}`];
  const count = (what: Departure["what"]) => departures.filter((one) => one.what === what).length;
  const parts = (["changed", "missing", "not in the record"] as const)
    .filter((what) => count(what) > 0)
    .map((what) => `${count(what)} ${what}`);
  return [
    bad(`${files}; ${parts.join(", ")}`),
    ...departures.map(({ path, what, expected, found }) => {
      const detail = what === "changed" ? `: expected ${expected}, found ${found}` : "";
      return `  ${what.padEnd(17)} ${plain(path)}${detail}`;
    }),
  ];
}
