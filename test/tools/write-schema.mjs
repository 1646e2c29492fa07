// Writes pipelines/schema.json anew: `npm run build && node test/tools/write-schema.mjs`.
import { writeFileSync } from "node:fs";
import { schemaText } from "../../dist/spec/schema.js";

writeFileSync(new URL("../../pipelines/schema.json", import.meta.url), schemaText());
