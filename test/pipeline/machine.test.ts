import { expect, test } from "vitest";
import { InputError, MachineError } from "../../src/errors.ts";
import { machineError, onDisk } from "../../src/pipeline/effects/machine.ts";

const system = (code: string) => Object.assign(new Error(`${code}: x`), { code });

test.each([
  ["ENOSPC", "machine.disk-full", "no space left on the disk"],
  ["EDQUOT", "machine.disk-full", "the disk quota used up"],
  ["EACCES", "machine.permission", "permission denied"],
  ["EPERM", "machine.permission", "permission denied"],
  ["EROFS", "machine.read-only", "a disk that can only be read"],
  ["ENOENT", "machine.vanished", "nothing there any more"],
  ["EMFILE", "machine.too-many-files", "too many files open at once"],
  ["EBUSY", "machine.busy", "held by another program"],
  ["EIO", "machine.disk", "an error of the disk (EIO)"],
])("%s is %s in words, exit code 3", (code, name, found) => {
  const error = machineError(system(code), "write", "/out/x");
  expect(error).toBeInstanceOf(MachineError);
  const { facts, exitCode } = error as MachineError;
  expect(facts).toMatchObject({ name, expected: "to write", found, where: { file: "/out/x" } });
  expect(facts.remedy).not.toBe("");
  expect(exitCode).toBe(3);
});

test("bugs and errors that are told already pass through unchanged", () => {
  const input = new InputError({ name: "x.y", expected: "", found: "", remedy: "" });
  for (const error of [new TypeError("bug"), system("ERR_INVALID_ARG_TYPE"), input, "text"]) {
    expect(machineError(error, "", "")).toBe(error);
    expect(() =>
      onDisk("", "", () => {
        throw error;
      }),
    ).toThrow(error === "text" ? "text" : (error as Error));
  }
});
