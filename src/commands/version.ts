import { readFileSync } from "node:fs";

/** The version in package.json, which stands one folder above src and dist alike. */
export function readVersion(): string {
  const text = readFileSync(new URL("../../package.json", import.meta.url), "utf8");
  const value: unknown = JSON.parse(text);
  return typeof value === "object" && value !== null && "version" in value
    ? String(value.version)
    : "unknown";
}
