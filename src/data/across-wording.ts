/** Findings that take the curves of several trials. */
export const acrossWording = {
  "repeats-agree": {
    weight: "note",
    message:
      "tests under the same conditions agree: one curve within 5 % of the tracer, counted in half times, and flow times mean and recovery within 5 % where they are known",
    couldBe: "both off in the same way, as a dose or a clock that is always wrong would make them",
    next: "quote them together; differences between other tests may be held against this",
  },
  "repeats-differ": {
    weight: "caution",
    message:
      "tests under the same conditions differ, in the curve, its time or what was recovered: more changed than the files say",
    couldBe:
      "a level, a flow or a wind that was not noted, an injection that was not mixed in alike, density of the slug",
    next: "look for what changed and declare it; repeat once more; no curve of these is known better than they differ",
  },
  "dosing-agrees": {
    weight: "note",
    message: "tests that put the tracer in differently give one curve within 5 % of the tracer, counted in half times",
    couldBe: "an effect too small or too slow to show in these records",
    next: "read them together",
  },
  "steps-disagree": {
    weight: "caution",
    message: "tests that put the tracer in differently give different curves at one flow",
    couldBe:
      "a tracer that sorbs, a slug or a dose heavier than the liquid, a dose that drifted, a background that changed",
    next: "repeat in the other order; halve the dose; use a second tracer",
  },
  "shape-scales": {
    weight: "note",
    message:
      "counted in half times, curves at different flows are one within 5 % of the tracer: the pattern of flow scales with the flow, shares of volume and splits stay",
    couldBe: "flows too near one another to show what changes farther away",
    next: "shares of volume and splits may be taken over between these flows; test again before going far beyond them",
  },
  "shape-nearly-scales": {
    weight: "note",
    message:
      "counted in half times, curves at different flows differ by more than noise, though by less than 5 % of the tracer: shares of volume and splits hold to that and no better",
    couldBe:
      "exchange or circulation that a stirrer sets, too small a part to show more; mixing at the injection, or a sample line or detector whose delay is not declared",
    next: "fit the flows together, once with what follows the flow and once with what stays; do not go beyond the flows that were tested",
  },
  "volume-changes": {
    weight: "caution",
    message:
      "counted in half times, curves at different flows are one within 5 % of the tracer, but flow times mean is not: the volume that takes part changes with the flow, or a flow or level is wrong",
    couldBe: "a flow meter that is off at one end of its range, a level that was not noted, tracer that sorbs",
    next: "check the flow meter and the level at both flows",
  },
  "spread-grows": {
    weight: "caution",
    message:
      "counted in half times, the curve grows wider with the flow: exchange or circulation that a stirrer or pump sets, not the flow",
    couldBe:
      "mixing at the injection that differs with the flow; a sample line or detector whose delay is not declared",
    next: "fit the flows together, with an exchange that does not follow the flow; test at another speed of the stirrer; do not scale fractions by the flow",
  },
  "shape-changes": {
    weight: "caution",
    message:
      "counted in half times, curves at different flows differ: the pattern of flow does not scale with the flow",
    couldBe:
      "exchange or circulation that a stirrer sets, where the noise hides that the curve grows wider with the flow; warm, cold or heavy liquid that layers at low flow, a jet that reaches farther at high flow, laminar flow that turns turbulent; a sample line or detector whose delay is not declared",
    next: "use each curve near its own flow only; fit the flows together; log temperatures at several depths",
  },
  "conditions-matter": {
    weight: "caution",
    message: "at one flow, tests under different conditions give different curves",
    couldBe:
      "layers of warm and cold water, wind or another level; or tests that scatter as much by themselves, where none was repeated",
    next: "log temperatures at several depths, wind and level; repeat one test under the same conditions; use each curve under its own conditions only",
  },
} as const satisfies Readonly<
  Record<string, { weight: "note" | "caution"; message: string; couldBe: string; next: string }>
>;
