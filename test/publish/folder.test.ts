import { describe, expect, test } from "vitest";
import { InputError, MachineError } from "../../src/errors.ts";
import type { FileSet } from "../../src/publish/disk.ts";
import { openOutput, recoverOutput } from "../../src/publish/folder.ts";
import { withRecord } from "../../src/publish/run-record.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { Killed, MemoryTree, memoryDisk } from "./memory-disk.ts";

const OUT = "/home/out";

function output(mark: string, names: readonly string[]): FileSet {
  const files = new Map(names.map((name) => [name, new TextEncoder().encode(`${mark} ${name}\n`)]));
  return withRecord({ version: "1", nodeMajor: 20, seed: 1, pipeline: mark, inputs: [], outputs: files });
}

const OLD = output("old", ["a.csv", "tables/b.csv", "only-old.txt"]);
const NEW = output("new", ["a.csv", "tables/b.csv", "only-new.txt"]);

function text(files: FileSet): Record<string, string> {
  return Object.fromEntries(
    [...files].map(([path, bytes]) => [`${OUT}/${path}`, new TextDecoder().decode(bytes)] as const).sort(),
  );
}

/** One whole run of a process; a kill ends it where it is. */
function run(
  tree: MemoryTree,
  pid: number,
  files: FileSet,
  kill?: number,
  torn?: boolean,
): "done" | "killed" {
  const disk = memoryDisk(tree, pid, kill, torn);
  try {
    const folder = openOutput(disk, OUT);
    try {
      folder.publish(files);
    } finally {
      folder.close();
    }
    tree.living.delete(pid);
    return "done";
  } catch (error) {
    if (error instanceof Killed) return "killed";
    throw error;
  }
}

function treeWith(files: FileSet | undefined): MemoryTree {
  const tree = new MemoryTree();
  if (files !== undefined) run(tree, 1, files);
  return tree;
}

function nameOf(act: () => unknown): string {
  try {
    act();
  } catch (error) {
    if (error instanceof InputError || error instanceof MachineError) return error.facts.name;
    throw error;
  }
  return "no error";
}

describe("an output folder is written whole or not at all", () => {
  for (const before of ["an old output", "no output"] as const)
    for (const torn of [false, true])
      test(`killed at every step, ${torn ? "within" : "after"} it, over ${before}`, () => {
        const old = before === "an old output" ? text(OLD) : {};
        const outcomes = new Set<string>();
        let kills = 0;
        for (let kill = 1; ; kill++) {
          const tree = treeWith(before === "an old output" ? OLD : undefined);
          if (run(tree, 2, NEW, kill, torn) === "done") break;
          kills++;
          // The next command only looks: it finds the old result or the new one, and nothing beside it.
          const disk = memoryDisk(tree, 3);
          recoverOutput(disk, OUT);
          const held = tree.picture();
          delete held[`${OUT}.lock`];
          const whole = JSON.stringify(held);
          expect([JSON.stringify(old), JSON.stringify(text(NEW))], `kill ${kill}`).toContain(whole);
          outcomes.add(whole);
          if (Object.keys(held).length > 0) expect(verifyOutput(disk, OUT).ok).toBe(true);
          // And the next run is right and leaves nothing else behind.
          expect(run(tree, 4, NEW)).toBe("done");
          expect(tree.picture()).toEqual(text(NEW));
        }
        expect(kills).toBeGreaterThan(15);
        // Both happen: a test in which every kill leaves the old result would show nothing about the swap.
        expect(outcomes.size).toBe(2);
      });

  test("killed again at every step of the recovery", () => {
    let pairs = 0;
    for (let first = 1; ; first++) {
      const once = treeWith(OLD);
      if (run(once, 2, NEW, first, true) === "done") break;
      for (let second = 1; ; second++) {
        const tree = treeWith(OLD);
        run(tree, 2, NEW, first, true);
        const ended = run(tree, 3, NEW, second, true);
        if (ended === "done") break;
        pairs++;
        recoverOutput(memoryDisk(tree, 4), OUT);
        const held = tree.picture();
        delete held[`${OUT}.lock`];
        expect([text(OLD), text(NEW)], `kills ${first}, ${second}`).toContainEqual(held);
      }
    }
    expect(pairs).toBeGreaterThan(200);
  });

  test("a swap whose new folder was damaged before it could be finished is undone", () => {
    for (let kill = 1; ; kill++) {
      const tree = treeWith(OLD);
      if (run(tree, 2, NEW, kill) === "done") break;
      if (!tree.has(`${OUT}.next/a.csv`)) continue;
      tree.files.set(`${OUT}.next/a.csv`, new TextEncoder().encode("torn"));
      recoverOutput(memoryDisk(tree, 3), OUT);
      const held = tree.picture();
      delete held[`${OUT}.lock`];
      expect(held, `kill ${kill}`).toEqual(text(OLD));
    }
  });

  test("an interruption while files are written leaves the old output and nothing beside it", () => {
    for (let after = 0; after < 6; after++) {
      const tree = treeWith(OLD);
      const folder = openOutput(memoryDisk(tree, 2), OUT);
      let calls = 0;
      const check = () => {
        if (calls++ === after) throw new RangeError("stop");
      };
      expect(() => folder.publish(NEW, check)).toThrow(RangeError);
      folder.close();
      expect(tree.picture()).toEqual(text(OLD));
    }
  });
});

describe("two runs on one folder", () => {
  test("the second is refused while the first lives, whatever it has done so far", () => {
    const tree = treeWith(OLD);
    const first = openOutput(memoryDisk(tree, 2), OUT);
    expect(nameOf(() => openOutput(memoryDisk(tree, 3), OUT))).toBe("publish.locked");
    first.publish(NEW);
    expect(nameOf(() => openOutput(memoryDisk(tree, 3), OUT))).toBe("publish.locked");
    first.close();
    expect(run(tree, 3, OLD)).toBe("done");
    expect(tree.picture()).toEqual(text(OLD));
  });

  test("a lock of a dead run is taken over", () => {
    const tree = treeWith(OLD);
    openOutput(memoryDisk(tree, 2), OUT);
    tree.living.delete(2);
    expect(run(tree, 3, NEW)).toBe("done");
    expect(tree.picture()).toEqual(text(NEW));
  });

  test("a run that has lost its lock changes nothing", () => {
    const tree = treeWith(OLD);
    const first = openOutput(memoryDisk(tree, 2), OUT);
    tree.files.set(`${OUT}.lock`, new TextEncoder().encode('{"host":"here","pid":9,"started":""}\n'));
    expect(nameOf(() => first.publish(NEW))).toBe("publish.lock-lost");
    first.close();
    expect(new TextDecoder().decode(tree.files.get(`${OUT}.lock`))).toContain('"pid":9');
    tree.files.delete(`${OUT}.lock`);
    expect(tree.picture()).toEqual(text(OLD));
  });
});

describe("what is not covey's is not touched", () => {
  const put = (tree: MemoryTree, path: string) => {
    memoryDisk(tree, 9).write(path, new TextEncoder().encode("mine"));
    tree.living.delete(9);
  };

  test.each([
    ["publish.folder-not-ours", `${OUT}/thesis.txt`, false],
    ["publish.folder-has-others", `${OUT}/notes.txt`, true],
    ["publish.name-taken", `${OUT}.next/x`, true],
    ["publish.name-taken", `${OUT}.previous/x`, true],
    ["publish.folder-not-ours", OUT, false],
  ])("%s for %s", (name, path, withOld) => {
    const tree = treeWith(withOld ? OLD : undefined);
    put(tree, path);
    const before = tree.picture();
    expect(nameOf(() => openOutput(memoryDisk(tree, 2), OUT))).toBe(name);
    expect(tree.picture()).toEqual(before);
  });

  test("droppings of file managers are no obstacle; an empty folder is taken", () => {
    const tree = treeWith(OLD);
    for (const name of [".DS_Store", "tables/~$b.xlsx", ".~lock.a.csv#"]) put(tree, `${OUT}/${name}`);
    expect(run(tree, 2, NEW)).toBe("done");
    expect(tree.picture()).toEqual(text(NEW));
    const empty = new MemoryTree();
    memoryDisk(empty, 1).makeFolder(OUT);
    expect(run(empty, 2, NEW)).toBe("done");
  });

  test("publish.tangled when all three folders stand after an interrupted swap", () => {
    const tree = treeWith(OLD);
    put(tree, `${OUT}.next/x`);
    put(tree, `${OUT}.previous/x`);
    tree.files.set(`${OUT}.journal`, new TextEncoder().encode("swapping\n"));
    expect(nameOf(() => recoverOutput(memoryDisk(tree, 2), OUT))).toBe("publish.tangled");
  });

  test("paths that climb out and outputs without a record are bugs", () => {
    const tree = treeWith(OLD);
    const folder = openOutput(memoryDisk(tree, 2), OUT);
    for (const path of ["../x", "/x", "a//b", "a\\b", "", "a/./b", "c:x"])
      expect(() => folder.publish(new Map([...NEW, [path, new Uint8Array()]]))).toThrow("not a path below");
    expect(() => folder.publish(new Map())).toThrow("needs its run-record.json");
    folder.close();
    expect(tree.picture()).toEqual(text(OLD));
  });
});
