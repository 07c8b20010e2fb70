import { rowMeant } from "../model/members.js";
import { isClosed, type Network } from "../model/network.js";
import type { Injection, Reading, Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { lateValues } from "../resolve/trial-on.js";
import { nearest } from "../text/nearest.js";
import { type Basis, concentrationOf, dosedInto, inBasis, isLevel } from "../units/basis.js";
import { siUnit } from "../units/describe.js";
import { type Dimension, dimensions, isRatio, sameDimension } from "../units/dimension.js";
import { followsKnown } from "./follows.js";
import { checkHolds } from "./holds.js";
import { isCell, placeNames } from "./places.js";
import { checkReacting } from "./reacting-trial.js";
import { sameKind } from "./same-kind.js";

/**
 * Does a trial fit a network: are its feeds, places and constants there, and do doses make the concentrations that
 * are read?
 * @param network undefined where none is known: then the units alone are checked
 */
export function checkTrial(network: Network | undefined, trial: Trial, report: Report): void {
  if (trial.reacting) {
    const known = trial.reacting.vessel ?? network;
    if (known) checkReacting(known, trial, trial.reacting, report);
    return;
  }
  if (network) checkPlaces(network, trial, report);
  for (const { level, at } of trial.contents?.levels ?? []) {
    for (const reading of trial.readings) if (!checkLevel(level, at, reading, report)) break;
  }
  // A draft is in the unit that the first dose makes: none where that is unknown.
  const first = trial.injections[0]?.form;
  const unknown = first?.is === "pulse" && first.amount.unknown;
  const known = trial.readings.filter((r) => !unknown || r.series || r.calibration);
  const bases = network ? [network.basis] : (["volume", "mass"] as const);
  for (const injection of trial.injections) {
    for (const reading of known) if (!checkAmount(injection, reading, bases, report)) break;
  }
}

function checkPlaces(network: Network, trial: Trial, report: Report): void {
  const { feeds, outlets, entered, left } = placeNames(network);
  const constants = network.names.filter((n) => n.role === "constant").map((n) => n.name);
  const look = (name: string, at: Parameters<Report>[1], wanted: string, among: readonly string[]): void => {
    if (!among.includes(name) && !(wanted.includes("compartment") && isCell(network, name)))
      report("unknown-place", at, {
        name,
        nearest: nearest(name, among),
        wanted,
        known: among,
        row: wanted.includes("compartment") ? rowMeant(network.compartments, name) : undefined,
      });
  };
  for (const { at, where } of trial.injections) {
    look(at, where, "feed or compartment", [...feeds, ...entered]);
  }
  if (trial.tracer?.follows) followsKnown(network, trial.tracer.follows, report);
  const closed = isClosed(network);
  for (const { at, where, form } of trial.injections) {
    const dosed = form.is === "pulse" || (form.is === "step" && !form.from && !isLevel(form.level.dimension));
    if (closed && !dosed) report("closed-inlet", where, { at });
  }
  for (const { of, at } of trial.contents?.levels ?? []) checkHolds(network, of, at, look, report);
  for (const { name, where } of trial.readings.flatMap((r) => r.places)) {
    look(name, where, "outlet, compartment or feed", [...outlets, ...left, ...feeds]);
  }
  for (const { body, at, factor } of trial.tracer?.retained ?? []) {
    look(body, at, "compartment", left);
    if (typeof factor === "number") continue;
    const known = network.names.filter((n) => isRatio(n.value.dimension)).map((n) => n.name);
    if (!known.includes(factor.name))
      report("retained-unknown", factor.at, { name: factor.name, nearest: nearest(factor.name, known), known });
  }
  for (const [name, value] of trial.flows) {
    look(name, value.at, "feed", feeds);
    if (feeds.includes(name)) sameKind(inBasis(dimensions.flow, network.basis), value, report);
  }
  for (const [name, { at }] of trial.late ?? []) look(name, at, "constant", constants);
  for (const [name, value] of [...trial.with, ...lateValues(network, trial, report)]) {
    if (!trial.late?.has(name)) look(name, value.at, "constant", constants);
    const constant = network.names.find((n) => n.role === "constant" && n.name === name);
    if (constant) sameKind(constant.value.dimension, value, report);
  }
}

/** Is what the vessel holds at the start what is read? True where it is. */
function checkLevel(level: Value, at: Parameters<Report>[1], reading: Reading, report: Report): boolean {
  if (level.unknown || reading.scale === "free" || sameDimension(level.dimension, reading.unit.dimension)) return true;
  const amount = level.unit?.name || "a bare number";
  report("contents-unit", at, { amount, at: reading.at, reading: reading.unit.name || "a bare number" });
  return false;
}

/** Does what is put in make the kind of concentration that is read? True where it does. */
function checkAmount(
  { form, at, where }: Injection,
  reading: Reading,
  bases: readonly Basis[],
  report: Report,
): boolean {
  if (reading.scale === "free" || (form.is === "pulse" && form.amount.unknown)) return true;
  const read = reading.unit.dimension;
  const written = form.is === "pulse" ? form.amount : form.is === "step" ? form.level : undefined;
  const given: Dimension = written?.dimension ?? (form.is === "signal" ? form.table.valueUnit.dimension : read);
  const makesIn = (basis: Basis): Dimension => (form.is === "pulse" ? concentrationOf(given, basis) : given);
  const right = bases.some(
    (b) => sameDimension(makesIn(b), read) || (form.is === "step" && sameDimension(dosedInto(given, b), read)),
  );
  if (right) return true;
  const name = written?.unit?.name ?? (form.is === "signal" ? form.table.valueUnit.name : "");
  report("amount-mismatch", written?.at ?? where, {
    at: reading.at,
    amount: name || `the unit of '${at}'`,
    reading: isRatio(read) ? reading.unit.name || "a bare number" : reading.unit.name,
    wanted: siUnit(makesIn(bases[0])) || "kg/kg",
  });
  return false;
}
