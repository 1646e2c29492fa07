import { execFileSync } from "node:child_process";

/** What a script said, and how much memory its process took at most. */
export interface Measured {
  readonly said: string;
  /** Most resident memory of the process up to each call of `mark()`, in kilobytes, by name. */
  readonly marks: readonly (readonly [string, number])[];
  /** Most resident memory of the whole process, in kilobytes. */
  readonly kilobytes: number;
}

/**
 * Runs a module script in a process of its own and says how much memory that took. The script may call `mark(name)`.
 *
 * The system's number of a process (ru_maxrss) begins with that of the process which started it, and a test worker has
 * read hundreds of files; a number taken so says more of the worker than of the script. So a small process is started,
 * which starts the one that is measured.
 */
export function peakMemoryOf(script: string): Measured {
  const measured = `
    const marks = [];
    globalThis.mark = (name) => marks.push([name, process.resourceUsage().maxRSS]);
    const said = [];
    console.log = (...words) => said.push(words.join(" "));
    await import(${JSON.stringify(`data:text/javascript,${encodeURIComponent(script)}`)});
    process.stdout.write(JSON.stringify({ said: said.join("\\n"), marks, kilobytes: process.resourceUsage().maxRSS }));`;
  const launcher = `
    require("node:child_process").execFileSync(process.execPath, ["--input-type=module", "-e", ${JSON.stringify(measured)}], {
      stdio: ["ignore", "inherit", "inherit"],
    });`;
  // The launcher's own memory is the least that can be measured, about 45 MB.
  return JSON.parse(execFileSync(process.execPath, ["-e", launcher], { encoding: "utf8" })) as Measured;
}
