import type { Plant } from "../compile/plant.js";
import { diversionRule, diversionWords } from "../report/study/diversion-words.js";
import type { DiversionWindow } from "../study/diversion.js";
import { dimensions } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { quantity } from "./json/quantity.js";

/** When to divert, for people. */
export function diversionText(plant: Plant, found: readonly DiversionWindow[], delay: number, time: Unit): string {
  return [...found.map((f) => `  ${diversionWords(plant, f, delay, time)}`), `  ${diversionRule}`].join("\n");
}

export const diversionJson = ({ network }: Plant, found: readonly DiversionWindow[], time: Unit): object[] =>
  found.map(({ line, window, draws }) => ({
    name: line.text,
    draws,
    touched: window?.touched ?? 0,
    stillAtEnd: window?.stillAtEnd ?? 0,
    from: quantity(window?.from, time),
    to: quantity(window?.to, time),
    volume: quantity(window?.volume ?? 0, network.units.unitFor(dimensions.volume)),
  }));
