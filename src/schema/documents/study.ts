import type { KeyShape, Shape } from "../shape.js";
import { choice, heading, list, name, named, quantity, record, text, whole } from "./common.js";

const dutyOf: KeyShape = {
  shape: text,
  says: "One of the files under `duties`.",
  required: true,
  example: "v3-normal.yaml",
};

const changeOf: KeyShape = {
  shape: text,
  says: "One of the files under `changes`: the question is about the vessel with this change.",
  example: "v3-second-tank.yaml",
};

const between: KeyShape = {
  shape: list(quantity(), 2),
  says: "The ends of the range; without them the parameter's own `between`.",
  example: "[200 L, 2000 L]",
};

const spacing: KeyShape = {
  shape: choice("linear", "log"),
  says: "Equal steps or equal ratios; without it as the parameter is declared, else `linear`.",
};

const swept: Shape = record({
  duty: dutyOf,
  change: changeOf,
  over: {
    says: "One or two inputs: parameters and constants of the network, `feed.flow`, `feed.A` (what a feed brings), constants of the chemistry, `temperature`, and `chain.repeat` (in whole steps).",
    required: true,
    example: "{riser: {between: [50 L, 400 L], points: 12}}",
    shape: named(
      record({
        between,
        points: { shape: whole(2), says: "How many values, the ends included.", default: "11", example: "12" },
        spacing,
      }),
      "dotted",
    ),
  },
});

const aimed: Shape = record({
  duty: dutyOf,
  change: changeOf,
  aim: {
    shape: text,
    says: "What a figure shall be: a line as in `report:`, one of `=`, `>=`, `<=`, and a value.",
    required: true,
    example: "conversion of A >= 95 %",
  },
  by: {
    shape: name,
    says: "The input that may move for it.",
    required: true,
    example: "feed.flow",
  },
  between,
  spacing,
  confidence: {
    shape: quantity("ratio"),
    says: "The share of what is possible that shall meet the aim, from 50 % to below 100 %. Without it the fitted values alone must.",
    example: "90 %",
  },
});

/** The whole job. */
export const studyShape = record({
  ...heading("study", "The question that the study answers.", "Why does V-3 convert less than designed?"),
  rivals: {
    shape: list(text),
    says: "Network files that compete to explain the trials, relative to this file. Each is fitted to all trials; they are ranked by AICc.",
    required: true,
    example: "[v3-bypass.yaml, v3-corner.yaml]",
  },
  trials: {
    shape: list(text),
    says: "Trial files that every rival is fitted to, all at once. Without one there is nothing to fit, and so nothing to rank or predict.",
    example: "[v3-salt.yaml]",
  },
  duties: {
    shape: list(text),
    says: "Duty files that are predicted, with intervals that carry what the fit left open and every declared `±`.",
    example: "[v3-normal.yaml]",
  },
  changes: {
    shape: list(text),
    says: "Change files (a `network` with `change`) that are tried on every surviving rival, with its fitted values. One that names something a rival lacks is skipped for that rival, and said.",
    example: "[v3-baffled.yaml]",
  },
  sweeps: {
    shape: list(swept),
    says: "Curves for the report: the figures of a duty over one or two inputs, for every surviving rival, with bands of what the fit left open and every declared `±`.",
    example: "[{duty: v3-normal.yaml, over: {feed.flow: {between: [5 L/min, 15 L/min]}}}]",
  },
  aims: {
    shape: list(aimed),
    says: "What it takes: the value of an input at which a figure is what it shall be, for every surviving rival, or that none is.",
    example: "[{duty: v3-normal.yaml, aim: conversion of A >= 90 %, by: bypass, confidence: 90 %}]",
  },
  out: {
    shape: text,
    says: "The folder for the report, relative to this file. `-o` comes first.",
    example: "reports/v3",
  },
  seed: {
    shape: whole(0),
    says: "Seed of everything drawn at random, so that a study can be repeated.",
    default: "1",
    example: "7",
  },
});
