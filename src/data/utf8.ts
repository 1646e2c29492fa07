import { InputError } from "../errors.ts";

/**
 * Bytes as text in UTF-8, a byte-order mark taken off. Other encodings are refused rather than guessed at: a name read
 * wrongly here would not meet the same name read rightly elsewhere. Throws `files.encoding` with the line.
 */
export function utf8Text(bytes: Uint8Array, file: string): string {
  const found = foreignSign(bytes);
  if (found !== undefined) throw notUtf8(file, found, 1);
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    let [line, begin] = [1, 0];
    for (let at = bytes.indexOf(10); at >= 0; at = bytes.indexOf(10, begin)) {
      if (!isUtf8(bytes.subarray(begin, at))) break;
      line++;
      begin = at + 1;
    }
    throw notUtf8(file, "bytes that are none, as Windows or Latin-1 text has them", line);
  }
}

/** UTF-16 by its byte-order mark, or bytes that no text has. */
function foreignSign(bytes: Uint8Array): string | undefined {
  if ((bytes[0] === 0xff && bytes[1] === 0xfe) || (bytes[0] === 0xfe && bytes[1] === 0xff)) return "UTF-16";
  return bytes.subarray(0, 4096).includes(0) ? "bytes that are no text" : undefined;
}

function isUtf8(bytes: Uint8Array): boolean {
  try {
    new TextDecoder("utf-8", { fatal: true }).decode(bytes);
    return true;
  } catch {
    return false;
  }
}

function notUtf8(file: string, found: string, line: number): InputError {
  return new InputError({
    name: "files.encoding",
    expected: "a text file in UTF-8",
    found,
    where: { file, line },
    remedy: "save it as UTF-8 (a spreadsheet calls it CSV UTF-8); check that it is the file you mean",
  });
}
