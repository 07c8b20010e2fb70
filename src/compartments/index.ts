import { cascade } from "./cascade.js";
import { dead } from "./dead.js";
import { dispersed } from "./dispersed.js";
import { junction } from "./junction.js";
import type { CompartmentKind } from "./kind.js";
import { laminar } from "./laminar.js";
import { part } from "./part.js";
import { stirred } from "./stirred.js";
import { tubular } from "./tubular.js";
import { zones } from "./zones.js";

/** The one table of kinds: what is in it exists everywhere, in the language, the engines, the drawings and the manual. */
export const kinds: Readonly<Record<string, CompartmentKind>> = {
  stirred,
  tubular,
  dispersed,
  laminar,
  cascade,
  junction,
  dead,
  zones,
  part,
};
