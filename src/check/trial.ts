import type { Network } from "../model/network.js";
import type { Injection, Reading, Trial } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import { siUnit } from "../units/describe.js";
import { type Dimension, dimensions, isRatio, over, sameDimension } from "../units/dimension.js";
import { isCell, placeNames } from "./places.js";
import { sameKind } from "./same-kind.js";

/**
 * Does a trial fit a network: are its feeds, places and constants there, and do doses make the concentrations that
 * are read?
 * @param network undefined where none is known: then the units alone are checked
 */
export function checkTrial(network: Network | undefined, trial: Trial, report: Report): void {
  if (network) checkPlaces(network, trial, report);
  for (const injection of trial.injections) {
    for (const reading of trial.readings) if (!checkAmount(injection, reading, report)) break;
  }
}

function checkPlaces(network: Network, trial: Trial, report: Report): void {
  const { feeds, outlets, entered, left } = placeNames(network);
  const constants = network.names.filter((n) => n.role === "constant").map((n) => n.name);
  const look = (name: string, at: Parameters<Report>[1], wanted: string, among: readonly string[]): void => {
    if (!among.includes(name) && !(wanted.includes("compartment") && isCell(network, name)))
      report("unknown-place", at, { name, nearest: nearest(name, among), wanted, known: among });
  };
  for (const { at, where } of trial.injections) {
    look(at, where, "feed or compartment", [...feeds, ...entered]);
  }
  for (const { at, where } of trial.readings) {
    look(at, where, "outlet, compartment or feed", [...outlets, ...left, ...feeds]);
  }
  for (const [name, value] of trial.flows) look(name, value.at, "feed", feeds);
  for (const [name, value] of trial.with) {
    look(name, value.at, "constant", constants);
    const constant = network.names.find((n) => n.role === "constant" && n.name === name);
    if (constant) sameKind(constant.value.dimension, value, report);
  }
}

/** Does what is put in make the kind of concentration that is read? True where it does. */
function checkAmount({ form, at, where }: Injection, reading: Reading, report: Report): boolean {
  if (reading.scale === "free") return true;
  const read = reading.unit.dimension;
  const written = form.is === "pulse" ? form.amount : form.is === "step" ? form.level : undefined;
  const given: Dimension = written?.dimension ?? (form.is === "signal" ? form.table.valueUnit.dimension : read);
  const makes = form.is === "pulse" ? over(given, dimensions.volume) : given;
  const dosed = form.is === "step" ? over(given, dimensions.flow) : undefined;
  if (sameDimension(makes, read) || (dosed && sameDimension(dosed, read))) return true;
  const name = written?.unit?.name ?? (form.is === "signal" ? form.table.valueUnit.name : "");
  report("amount-mismatch", written?.at ?? where, {
    at: reading.at,
    amount: name || `the unit of '${at}'`,
    reading: isRatio(read) ? reading.unit.name || "a bare number" : reading.unit.name,
    wanted: siUnit(makes),
  });
  return false;
}
