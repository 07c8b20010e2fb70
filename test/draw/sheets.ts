import type { BodyRole, FlowSheet, SheetBody, SheetStream, StreamRole } from "../../src/draw/sheet.js";
import { aspects, deadBody, junctionBody, stirredBody, tubularBody } from "../../src/svg/bodies.js";

/** Demo vessels (invented) that between them show every thing a flow diagram can show. Litres and L/min as written. */
const litre = 1e-3;
const perMinute = 1e-3 / 60;
export const units = { volume: { name: "L", factor: litre }, flow: { name: "L/min", factor: perMinute } };

export const feed = (name: string): SheetBody => ({ name, volume: 0, role: "feed" });
export const outlet = (name: string): SheetBody => ({ name, volume: 0, role: "outlet" });
export const stirred = (name: string, volume: number, repeat = 1, backflow = false): SheetBody => ({
  name,
  volume: volume * litre,
  role: "body",
  picture: (box) => stirredBody(box, repeat, backflow),
  aspect: aspects.stirred(repeat),
});
export const tubular = (name: string, volume: number): SheetBody => ({
  name,
  volume: volume * litre,
  role: "body",
  picture: tubularBody,
  aspect: aspects.tubular,
});
export const junction = (name: string): SheetBody => ({ name, volume: 0, role: "junction", picture: junctionBody });
export const dead = (name: string, volume: number): SheetBody => ({
  name,
  volume: volume * litre,
  role: "dead" as BodyRole,
  picture: deadBody,
  aspect: aspects.dead,
});

export const stream = (
  from: string,
  to: string,
  flow: number,
  label = `${flow} L/min`,
  role: StreamRole = "forward",
): SheetStream => ({ from, to, flow: flow * perMinute, role, label });

export const exchange = (from: string, to: string, flow: number): SheetStream =>
  stream(from, to, flow, `${flow} L/min`, "exchange");

const sheet = (title: string, bodies: SheetBody[], streams: SheetStream[], says?: string): FlowSheet => ({
  title,
  ...(says === undefined ? {} : { says }),
  bodies,
  streams,
  units,
});

export const sheets: Readonly<Record<string, FlowSheet>> = {
  "one-tank": sheet(
    "One stirred tank",
    [feed("feed"), stirred("tank", 500), outlet("product")],
    [stream("feed", "tank", 10, ""), stream("tank", "product", 10, "")],
  ),
  v3: sheet(
    "Ester hydrolysis vessel V-3, as built",
    [
      { ...feed("feed"), marks: ["injection"] },
      tubular("inlet-leg", 150),
      stirred("bulk", 650),
      stirred("corner", 200),
      { ...outlet("product"), marks: ["probe"] },
    ],
    [
      stream("feed", "inlet-leg", 9),
      { ...stream("feed", "product", 1, "1 L/min (10 %)"), accent: true },
      stream("inlet-leg", "bulk", 9),
      stream("bulk", "product", 9),
      exchange("bulk", "corner", 1.5),
    ],
    "vessel 1000 L, feed 10 L/min, mean time 100 min",
  ),
  loop: sheet(
    "Loop reactor with settling loss",
    [
      feed("feed"),
      junction("tee"),
      tubular("riser", 120),
      stirred("drum", 900, 3, true),
      dead("sludge", 220),
      outlet("product"),
      outlet("purge"),
    ],
    [
      stream("feed", "tee", 10, ""),
      stream("tee", "riser", 40),
      stream("riser", "drum", 40),
      stream("drum", "tee", 30, "30 L/min (75 %)"),
      stream("drum", "product", 9),
      stream("drum", "purge", 1),
    ],
  ),
  parallel: sheet(
    "Two paths, one with a slow side",
    [
      feed("feed"),
      feed("reagent"),
      stirred("upper", 300),
      stirred("lower", 500),
      stirred("lee", 80),
      stirred("nook", 20),
      tubular("outlet-pipe", 60),
      stirred("polish", 100),
      outlet("product"),
    ],
    [
      stream("feed", "upper", 4, "4 L/min (40 %)"),
      stream("feed", "lower", 6, "6 L/min"),
      stream("reagent", "polish", 2),
      stream("upper", "outlet-pipe", 4),
      stream("lower", "outlet-pipe", 5),
      stream("lower", "lower", 1),
      stream("lower", "product", 1),
      stream("outlet-pipe", "polish", 9),
      stream("polish", "upper", 0.5, "0.5 L/min"),
      stream("polish", "product", 10.5),
      exchange("upper", "lower", 0.8),
      exchange("lower", "lee", 0.4),
      exchange("lee", "nook", 0.05),
    ],
  ),
  closed: sheet(
    "Flask on total return",
    [stirred("flask", 2), tubular("line", 0.1)],
    [stream("flask", "line", 0.3), stream("line", "flask", 0.3)],
  ),
};
