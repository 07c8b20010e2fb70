import { Command, InvalidArgumentError, Option } from "commander";
import { command } from "./command.js";
import { addLibraryCommands, libraryCommandNames } from "./library-commands.js";
import type { Stage } from "./stage.js";
import { version } from "./version.js";

/** The commands that this version has. */
export const commandNames: ReadonlySet<string> = new Set([
  ...["check", "draw", "simulate", "moments", "fit", "study", "sweep", "plan", "watch", "language-server"],
  ...libraryCommandNames,
]);

/** Every command with its arguments and options. The work itself is loaded when it is asked for. */
export function program(stage: Stage): Command {
  const root = new Command("backmix")
    .description(
      "From a tracer test to a decision: fit compartment networks to residence-time data\nand predict what the vessel makes.",
    )
    .version(version, "--version", "print the version")
    .helpOption("-h, --help", "print this help")
    .helpCommand(false)
    .exitOverride()
    .configureOutput({
      writeOut: stage.write,
      writeErr: stage.write,
      outputError: () => {},
      getOutHelpWidth: () => stage.width,
    });
  addCheck(root, stage);
  addDraw(root, stage);
  addSimulate(root, stage);
  addMoments(root, stage);
  addFit(root, stage);
  addStudy(root, stage);
  addSweep(root, stage);
  addPlan(root, stage);
  addWatch(root, stage);
  addLanguageServer(root, stage);
  addLibraryCommands(root, stage);
  addOutside(root, stage);
  root.addHelpText(
    "after",
    `\nEvery command reads files, or - for standard input, and takes --json.\n\nStart here:\n  backmix study networks/demo/study.yaml`,
  );
  return root;
}

/** Commands that follow parts and bases; `tidy` looks at its files alone. */
function addOutside(root: Command, { inputs }: Stage): void {
  for (const c of root.commands) {
    if (c.name() !== "tidy") c.option("--allow-outside", "let parts and bases lie outside the library");
  }
  root.hook("preAction", (_, command) => {
    inputs.allowOutside = command.opts().allowOutside === true;
  });
}

function addCheck(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "check <files...>", "look a document over; of a network print flows, volumes and space times", [
    "check networks/demo/bypass.yaml",
  ])
    .addOption(
      new Option("--format <form>", "how to print").choices(["text", "json", "github", "sarif"]).default("text"),
    )
    .action((files: string[], options) =>
      perform("check", async () => (await import("./check.js")).check(files, options, { inputs, io })),
    );
}

function addDraw(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "draw <network>", "the flow diagram: bodies sized by volume, streams by flow", [
    "draw networks/demo/bypass.yaml -o bypass.svg",
    'draw networks/demo/both.yaml --show "mean age" -o ages.png',
    "draw networks/demo/bypass.yaml --compare networks/demo/both.yaml -o moved.svg",
  ])
    .option("-o, --output <file>", "write to F.svg, F.png or F.html; else the SVG goes to standard output")
    .option(
      "--show <quantity>",
      "as tone: mean age, life expectancy, space time, concentration of A, production of A, temperature",
    )
    .option("--duty <file>", "the duty that a reaction's quantity is of")
    .option("--compare <network>", "draw this one instead, with what moved since the first")
    .option(
      "--set <name=value>",
      "another value of a parameter, constant or feed.flow, with --duty also of the duty (k, feed.A, temperature); repeatable",
      collect,
    )
    .action((network: string, options) =>
      perform("draw", async () => (await import("./draw.js")).draw(network, options, { inputs, io })),
    );
}

function addSimulate(root: Command, { perform, inputs, io }: Stage): void {
  const simulate = command(root, "simulate <network>", "what a network does with tracer, or makes of its feeds", [
    "simulate networks/demo/bypass.yaml --pulse feed",
    'simulate networks/demo/bypass.yaml --step feed --until "6 h" -o step.csv',
    "simulate networks/demo/bypass.yaml --duty networks/demo/normal.yaml",
    'simulate networks/demo/bypass.yaml --duty networks/demo/normal.yaml --transient --until "3 h"',
  ])
    .option("--pulse <feed>", "a unit pulse into a feed or compartment")
    .option("--step <feed>", "a unit step in a feed or compartment")
    .option("--trial <file>", "what the probes of a trial would read")
    .option("--duty <file>", "the steady state of a duty, with its report")
    .option("--transient", "with --duty: follow it in time, from its `contents`, or through what changes in its feeds")
    .option(
      "--states <name=a..b>",
      "with --duty: all steady states over a range of one input, and where they end; -o also writes .svg, .png",
    )
    .option("--funnel", "with --transient: how high the duty's upset may be for how long (--times) within its limit")
    .option("--draws <n>", "with --transient: when to divert, from so many draws of all that has a `±`", whole(20))
    .option("--delay <time>", "with --draws: how late an analyser tells")
    .option("--at <names>", "inner places to look at besides the outlets; repeatable", collectNames)
    .option(
      "--set <name=value>",
      "another value of a parameter, constant or feed.flow, with --duty also of the duty (k, feed.A, temperature); repeatable",
      collect,
    )
    .option(
      "--follows <name>",
      "with --pulse and --step: a substance that the network `sends` otherwise than the liquid",
    )
    .option("--until <time>", 'end of the curve, such as "6 h"')
    .option("--points <n>", "points from 0 to the end", whole(2), undefined)
    .option("--times <list>", 'the times themselves, such as "0.5, 1, 2.5 min"')
    .addOption(
      new Option("--engine <name>", "how to integrate")
        .choices(["auto", "exact", "ode", "laplace", "chebyshev", "krylov"])
        .default("auto"),
    )
    .option("--verify", "run a second engine and print the largest difference")
    .option(
      "-o, --output <file>",
      "write the curves to F.csv, F.svg or F.png; at a steady duty what leaves every cell, to F.csv",
    )
    .option("--ages <file>", "with --pulse and --step: write mean age and life expectancy at every cell to F.csv")
    .option(
      "--along <file>",
      "with --duty: concentrations along tubular and dispersed bodies to F.csv, F.svg or F.png",
    );
  simulate.action((network: string, options) =>
    perform("simulate", async () => (await import("./simulate.js")).simulate(network, options, { inputs, io })),
  );
}

function addMoments(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "moments <trial>", "what the data say by themselves, without a model", [
    "moments networks/demo/salt-normal.yaml",
  ])
    .option("-o, --output <file>", "write E, F, W, internal age and intensity with errors to F.csv")
    .option("--vessel <network>", "the network that gives flows and volume, before the trial's own `vessel:`")
    .action((trial: string, options) =>
      perform("moments", async () => (await import("./moments.js")).moments(trial, options, { inputs, io })),
    );
}

function addFit(root: Command, { perform, inputs, io }: Stage): void {
  const fit = command(root, "fit <network>", "estimate the parameters of a network from trials", [
    "fit networks/demo/bypass.yaml --trial networks/demo/salt-normal.yaml",
  ])
    .requiredOption("--trial <files...>", "the trials, all fitted at once; repeatable")
    .option("--free <names>", "parameters to estimate, by commas (default: all)", collectNames)
    .option("--starts <n>", "starts besides the file's own values", whole(0))
    .option("--seed <n>", "seed of the starts", whole(0), 1)
    .option("--strict", "exit 1 when a parameter ends at a bound or cannot be told")
    .option(
      "--profile",
      "profile every parameter: intervals that hold where the curve bends or a front crosses a sample",
    )
    .option(
      "--further",
      "which further test would narrow the intervals most, and which networks of shared/parts show the same curve (by itself where a parameter cannot be told)",
    )
    .option("--write", "put the values back into the network's file, comments kept");
  fit
    .option("--bootstrap <n>", "refit so many data sets made anew from the fit, on all cores", whole(1))
    .addOption(
      new Option("--resample <how>", "how they are made (default: residual, hanging together as they did)").choices([
        "residual",
        "block",
        "parametric",
      ]),
    )
    .option("--resume <file>", "where the bootstrap saves what is done, and goes on from")
    .option("--jobs <n>", "threads of the bootstrap (default: all cores)", whole(1))
    .action((network: string, options) =>
      perform("fit", async () => (await import("./fit.js")).fitCommand(network, options, { inputs, io })),
    );
}

function addPlan(root: Command, { perform, inputs, io }: Stage): void {
  command(
    root,
    "plan <network>",
    "a tracer test before it is run: amount, sampling times, end, and what it would tell",
    [
      "plan networks/demo/both.yaml --trial networks/demo/draft.yaml",
      'plan networks/demo/both.yaml --trial networks/demo/draft.yaml --until "3 h" -o sheet.md',
      "plan networks/demo/both.yaml --trial networks/demo/draft.yaml --against networks/demo/bypass.yaml",
    ],
  )
    .requiredOption("--trial <file>", "the draft: a trial whose readings have no file, with their `noise:`")
    .option("--free <names>", "parameters that the test is for, by commas (default: all)", collectNames)
    .option(
      "--against <rival>",
      "another network: which test, the draft or a variation of it, would tell the two apart",
    )
    .option("--until <time>", 'when to stop, such as "6 h" (default: when 98 % of the mean has been seen)')
    .option("--samples <n>", "samples after the injection, at each reading", whole(5), 40)
    .option("--every <time>", 'even samples of a logger, such as "10 s"')
    .option("-o, --output <file>", "write the field sheet to F.md or F.html")
    .action((network: string, options) =>
      perform("plan", async () => (await import("./plan.js")).plan(network, options, { inputs, io })),
    );
}

function addStudy(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "study <file>", "the whole job: rivals ranked, duties predicted, changes compared, one report", [
    "study networks/demo/study.yaml -o report",
  ])
    .option("-o, --output <folder>", "where the report goes, before the study's own `out:`")
    .option("--starts <n>", "starts of each fit besides the file's own values", whole(0))
    .action((file: string, options) =>
      perform("study", async () => (await import("./study.js")).study(file, options, { inputs, io })),
    );
}

function addSweep(root: Command, { perform, inputs, io }: Stage): void {
  command(
    root,
    "sweep <network>",
    "the figures of a duty over one or two inputs, or the value of an input that meets an aim",
    [
      'sweep networks/demo/both.yaml --duty networks/demo/normal.yaml --over "bypass=0 %..20 %:5"',
      'sweep networks/demo/both.yaml --duty networks/demo/normal.yaml --aim "conversion of ester >= 85 %" --by bypass',
    ],
  )
    .requiredOption("--duty <file>", "the duty whose figures are swept")
    .option(
      "--over <range>",
      'an input, its ends and points: "riser=50 L..400 L:16", " log" for equal ratios; repeatable',
      collect,
    )
    .option("--aim <aim>", 'what a figure shall be: "conversion of A >= 95 %", with =, >= or <=')
    .option("--by <name>", "with --aim: the input that may move")
    .option("--between <range>", 'with --aim: where to look (default: its `between:`), such as "500 L..2000 L"')
    .option("--confidence <share>", 'with --aim: the share of the draws that shall meet it, such as "90 %"')
    .option("--trial <files...>", "fit to these trials first, and carry what they leave open; repeatable")
    .option(
      "--set <name=value>",
      "another value of a parameter, constant or feed.flow, or of the duty (k, feed.A, temperature), taken as known; repeatable",
      collect,
    )
    .option(
      "--draws <n>",
      "draws of what is unsure at each point; 0: middle values alone; default by the size of the network, 100 to 1000",
      whole(0),
    )
    .option("--seed <n>", "seed of the draws", whole(0), 1)
    .option("-o, --output <file>", "with --over: the table to F.csv, or the curves to F.svg or F.png")
    .action((network: string, options) =>
      perform("sweep", async () => (await import("./sweep.js")).sweepCommand(network, options, { inputs, io })),
    );
}

function addWatch(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "watch <files...>", "a page on this machine that draws files anew on every save", [
    "watch networks/demo/both.yaml networks/demo/study.yaml",
  ])
    .option("--port <n>", "where the page is, instead of any port that is free", whole(0), 0)
    .action((files: string[], options) =>
      perform("watch", async () => (await import("./watch.js")).watch(files, options, { inputs, io })),
    );
}

function addLanguageServer(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "language-server", "the Language Server Protocol on standard input and output, for editors", [
    "language-server",
  ])
    .option("--stdio", "the only way that it speaks; many editors ask for it by name")
    .action(() =>
      perform("language-server", async () =>
        (await import("./language-server/serve.js")).languageServer({ inputs, io }),
      ),
    );
}

const collect = (value: string, before: readonly string[] | undefined): string[] => [...(before ?? []), value];

const collectNames = (value: string, before: readonly string[] | undefined): string[] => [
  ...(before ?? []),
  ...value
    .split(",")
    .map((n) => n.trim())
    .filter((n) => n !== ""),
];

const whole =
  (least: number) =>
  (text: string): number => {
    const n = Number(text);
    if (!/^\d+$/.test(text) || !Number.isSafeInteger(n) || n < least) {
      throw new InvalidArgumentError(`write a whole number, ${least} or more.`);
    }
    return n;
  };
