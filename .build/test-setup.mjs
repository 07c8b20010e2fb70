// Tests run without a build before them: only the validators must be there.
import { schemasAreStale, writeSchemas } from "./schemas.mjs";

export async function setup() {
  if (schemasAreStale()) await writeSchemas();
}
