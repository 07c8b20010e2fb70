/** The five documents as the manual shows them, without what this version refuses. */
export const examples = {
  network: `network: Ester hydrolysis vessel V-3, as built
format: 1
notes: The gauge glass shows a quiet corner under the coil.

constants:
  total: 1000 L ± 1 %                 # from the drawing, less the coil
  speed: {value: 90 1/min, about: stirrer}

parameters:                           # what a fit may move; simulate uses value
  bypass:   {value: 10 %, between: [0 %, 60 %], about: share of the feed that slips to the outlet}
  riser:    {value: 150 L, between: [5 L, 480 L]}
  stagnant: {value: 200 L, between: [5 L, 480 L]}
  renewal:  {value: 1.5 L/min, between: [0.01 L/min, 50 L/min], spacing: log}

requires: [riser + stagnant < total]  # what physics forbids a fit to try

feeds:
  feed: {flow: 10 L/min, to: {inlet-leg: rest, product: bypass}}

compartments:
  inlet-leg: {kind: tubular, volume: riser, to: bulk}
  bulk:
    kind: stirred
    volume: total - riser - stagnant
    to: product
    exchange: {corner: renewal}       # equal flow both ways; written on one side only
  corner: {kind: stirred, volume: stagnant}
  chain: {kind: stirred, volume: 3 L, repeat: 3, to: {tee: 4 L/min, chain: rest}}
  tee: {kind: junction, to: product}
  heel: {kind: dead, volume: 2 L}

outlets: [product]

checks:                               # a model library is tested like code
  - {mean-time: product, equals: 100 min, within: 0.01 %}
  - {volume: all, equals: 1000 L}
`,
  change: `network: V-3 with a baffle
format: 1
change:
  parameters: {bypass: {value: 2 %}, riser: null}
  compartments:
    corner: {volume: 3 L}
    second: {kind: stirred, volume: 500 L, to: product}
`,
  trial: `trial: Salt pulse, normal flow
format: 1
vessel: v3.yaml
flows: {feed: 10 L/min ± 2 %}
with: {speed: 90 1/min}
injection: {at: feed, pulse: 50 g ± 1 %, start: 09:14:20, lasting: 2 min}
readings:
  - at: product
    file: v3-salt.csv
    time: {column: Time, format: "h:m:s"}
    value: {column: "Cond [mS/cm]", unit: mS/cm}
    calibration: {blank: 0.21 mS/cm, rise: 1.9 mS/cm, per: 1 g/L}
    baseline: drift
    scale: known
    line: {delay: 0.3 min, lag: 0.1 min}
    noise: {floor: 0.01 g/L, relative: 1 %}
    leave-out: [{from: 310 min, to: 320 min, because: air in the cell}]
    csv: {decimal: comma, separator: ";", header: 3, missing: [Bad]}
  - {at: bulk, file: b.csv, time: {column: 1, unit: min}, value: {column: 2, unit: g/L}}
`,
  chemistry: `chemistry: Consecutive hydrolysis
format: 1
species: {A: {molar-mass: 88.1 g/mol}, B: {}, P: {}, S: {}}
constants: {k1: {at: 298.15 K, value: 2 L/mol/min, activation: 45 kJ/mol}, k2: 0.5 L/mol/min ± 5 %, k3: 1 1/min}
reactions:
  - {equation: A + B -> P, rate: k1 * A * B}
  - {equation: P + B <-> S, rate: mass-action, constant: [k2, k3]}
  - {makes: {A: -1, P: 0.8}, rate: k3 * A}
`,
  duty: `duty: Normal production, 15 % up, with a cold jacket
format: 1
chemistry: ../../shared/chemistry/hydrolysis.yaml
flows: {feed: 11.5 L/min}
with: {k2: 0.4 L/mol/min ± 20 %}
feeds: {feed: {A: 1 mol/L ± 1 %, B: 1.2 mol/L}}
temperature: 60 degC
report: [conversion of A, yield of P from A, selectivity of P over S, log-removal of A, A at product, t10 at product]
`,
  study: `study: Why does V-3 convert less than designed?
format: 1
rivals: [v3-bypass.yaml, v3-corner.yaml, v3-both.yaml]
trials: [v3-salt.yaml, v3-salt-half-flow.yaml]
duties: [v3-normal.yaml]
changes: [v3-baffled.yaml, v3-second-tank.yaml]
out: reports/v3
seed: 7
`,
} as const;
