import { type Basis, inBasis } from "../units/basis.js";
import { describeDimension, exampleFor, nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, sameDimension } from "../units/dimension.js";

/** What a key takes: one dimension, one of several, or any. */
export type Wanted = Dimension | readonly Dimension[] | "any";

/** True where a dimension is among those wanted. */
export const fits = (wanted: Wanted, d: Dimension): boolean =>
  wanted === "any" || listed(wanted).some((w) => sameDimension(w, d));

/** What a key takes in a network of that basis. */
export const wantedIn = (wanted: Wanted, basis: Basis): Wanted =>
  wanted === "any" || basis === "volume"
    ? wanted
    : isOne(wanted)
      ? inBasis(wanted, basis)
      : wanted.map((d) => inBasis(d, basis));

/** "a volume (like 150 L) or a flow (volume per time, like 10 L/min)". */
export const describeWanted = (wanted: Wanted, basis: Basis = "volume"): string => {
  if (wanted === "any") return "a value";
  const masses = basis === "mass" && listed(wanted).some((d) => heldExample(d));
  const described = listed(wanted).map((d) => {
    const example = masses && heldExample(d);
    return example ? `${nameDimension(d).replace(/ \(.*/, "")} (like ${example})` : describeDimension(d);
  });
  return `${masses ? "with `basis: mass` " : ""}${described.join(" or ")}`;
};

/** Is it by mass what a key wants by volume? */
export const isWeighed = (got: Dimension, wanted: Wanted): boolean =>
  wanted !== "any" &&
  heldExample(got) !== undefined &&
  listed(wanted).some((d) => d[0] === 3 && sameDimension(inBasis(d, "mass"), got));

/** A hold-up or a flow by mass as one would write it. */
const heldExample = (d: Dimension): string | undefined =>
  sameDimension(d, dimensions.mass) ? "150 kg" : sameDimension(d, dimensions["mass rate"]) ? "120 kg/h" : undefined;

/** One value that would be right. */
export const exampleOf = (wanted: Wanted, basis: Basis = "volume"): string => {
  if (wanted === "any") return "10 L/min";
  const [first] = listed(wanted);
  return (basis === "mass" && heldExample(first)) || exampleFor(first);
};

const isOne = (wanted: Dimension | readonly Dimension[]): wanted is Dimension => typeof wanted[0] === "number";

const listed = (wanted: Dimension | readonly Dimension[]): readonly Dimension[] => (isOne(wanted) ? [wanted] : wanted);
