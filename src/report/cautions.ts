import type { CautionTriggers } from "./input.js";

export interface Caution {
  readonly about: string;
  readonly says: string;
}

/** The cautions that apply, in plain words; what was tested always does. */
export function cautionsFor(triggers: CautionTriggers): readonly Caution[] {
  const chosen = cautionsOf(triggers);
  const beyond = (triggers.extrapolated ?? []).map((what) => ({
    about: "Beyond what was tested",
    says: `${what}. The network was not tested there: treat the number as an extrapolation, and test before relying on it.`,
  }));
  return [...beyond, ...chosen, triggers.untested ? nothingTested : always];
}

/** Those that are called for, and no more. */
export const cautionsOf = (triggers: CautionTriggers): readonly Caution[] =>
  rules.filter((rule) => triggers[rule.when]).map(({ about, says }) => ({ about, says }));

const always: Caution = {
  about: "Tested conditions only",
  says: "The result holds for the flows, levels, temperatures and state of the vessel that were tested. Fouling, gas, season and a changed level change it.",
};

const nothingTested: Caution = {
  about: "Nothing tested",
  says: "The vessel was not tested. A bypass, dead water or a wrong volume or flow shows in none of these figures.",
};

interface CautionRule extends Caution {
  readonly when: Exclude<keyof CautionTriggers, "extrapolated" | "untested">;
}

const rules: readonly CautionRule[] = [
  {
    when: "disinfection",
    about: "Disinfection credit",
    says: "A modelled log-removal is not credit. Use the regulator's tracer method, flows, baffling rules and sampling points; the coldest water and the least favourable pH are the worst case.",
  },
  {
    when: "drinkingWater",
    about: "Drinking water",
    says: "Use only tracers approved for potable water, at the approved level, with written permission of operator and regulator.",
  },
  {
    when: "heat",
    about: "Heat",
    says: "A model made from a tracer test says nothing about runaway. Several steady states are a warning, and one is no proof of safety: do not use this for relief sizing or interlock set points without calorimetry and a qualified person.",
  },
  {
    when: "toxic",
    about: "Toxic or corrosive material",
    says: "A bypass or a dead zone can let unreacted reagent through unseen. Check headspace, vent and off-gas as well as the outlet.",
  },
  {
    when: "drug",
    about: "Drug product",
    says: "Validated software, change control and the quality unit decide on release, not this output alone.",
  },
  {
    when: "aseptic",
    about: "Hold for sterility",
    says: "The fastest particle decides. It must be found by the method that the authority approves.",
  },
  {
    when: "radiotracer",
    about: "Radiotracer",
    says: "Only licensed people may use it. Dose, exclusion zone, transport and waste need their own plan; nothing here is permission.",
  },
  {
    when: "recirculates",
    about: "Tracer that comes round again",
    says: "Wait at least five loop times before a repeat, and measure the background again.",
  },
  {
    when: "fastReaction",
    about: "Fast reaction",
    says: "Where a reaction is as fast as mixing, residence times do not fix the result: micromixing does, and it is not in this model.",
  },
];
