/** The vessels of shared/reference/closed-forms/cases.json that this version's kinds can spell, with a flow of 1 L/min. */
export const vessels: Readonly<Record<string, string>> = {
  "stirred-tank-tau5": body("  a: {kind: stirred, volume: 5 L, to: out}"),
  "tanks-N2-tau10": body("  a: {kind: stirred, repeat: 2, volume: 10 L, to: out}"),
  "tanks-N5-tau10": body("  a: {kind: stirred, repeat: 5, volume: 10 L, to: out}"),
  "tanks-N20-tau1": body("  a: {kind: stirred, repeat: 20, volume: 1 L, to: out}"),
  "plug-flow-tau3": body("  a: {kind: tubular, volume: 3 L, to: out}"),
  "bypass-dead-b0.2-a0.7-tau10": body(
    "  a: {kind: stirred, volume: 7 L, to: out}\n  d: {kind: dead, volume: 3 L}",
    "{a: rest, out: 20 %}",
  ),
  "bypass-dead-b0.05-a0.9-tau60": body(
    "  a: {kind: stirred, volume: 54 L, to: out}\n  d: {kind: dead, volume: 6 L}",
    "{a: rest, out: 5 %}",
  ),
  "stagnant-phi0.3-q0.5-tau12": body(
    "  a: {kind: stirred, volume: 8.4 L, to: out, exchange: {s: 0.5 L/min}}\n  s: {kind: stirred, volume: 3.6 L}",
  ),
  "stagnant-phi0.15-q0.02-tau1": body(
    "  a: {kind: stirred, volume: 0.85 L, to: out, exchange: {s: 0.02 L/min}}\n  s: {kind: stirred, volume: 0.15 L}",
  ),
  "recycle-plug-R1-tau8": body("  a: {kind: tubular, volume: 8 L, to: {a: 50 %, out: rest}}"),
  "recycle-plug-R3-tau10": body("  a: {kind: tubular, volume: 10 L, to: {a: 3 L/min, out: rest}}"),
  "recycle-tanks-R2-N2-tau9": body("  a: {kind: stirred, repeat: 2, volume: 9 L, to: {a: 2 L/min, out: rest}}"),
  "recycle-tanks-R0.5-N3-tau30": body("  a: {kind: stirred, repeat: 3, volume: 30 L, to: {a: 0.5 L/min, out: rest}}"),
  "parallel-0.3-2-0.5-20-0.2-6": body(
    [
      "  a: {kind: stirred, volume: 0.3 * 2 L, to: out}",
      "  b: {kind: stirred, volume: 0.5 * 20 L, to: out}",
      "  c: {kind: tubular, volume: 0.2 * 6 L, to: out}",
    ].join("\n"),
    "{a: 30 %, b: 50 %, c: rest}",
  ),
  "tank-plug-6-4": body("  a: {kind: stirred, volume: 6 L, to: b}\n  b: {kind: tubular, volume: 4 L, to: out}"),
};

function body(compartments: string, to = "a"): string {
  return [
    "network: A vessel with a closed form",
    "format: 1",
    "feeds:",
    `  in: {flow: 1 L/min, to: ${to}}`,
    "compartments:",
    compartments,
    "outlets: [out]",
    "",
  ].join("\n");
}
