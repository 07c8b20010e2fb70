/** Small documents for tests of commands. */
export const tank = `network: One tank
format: 1
parameters:
  size: {value: 100 L, between: [1 L, 1000 L]}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: size, to: product}
outlets: [product]
`;

export const tube = `network: One tube
format: 1
feeds: {feed: {flow: 10 L/min, to: pipe}}
compartments:
  pipe: {kind: tubular, volume: 100 L, to: product}
outlets: [product]
`;

/** Tank with a corner and a bypass: an exchange, a spike, dead water. */
export const vessel = `network: Vessel
format: 1
parameters:
  bypass: {value: 10 %, between: [0 %, 60 %]}
feeds: {feed: {flow: 10 L/min, to: {bulk: rest, product: bypass}}}
compartments:
  bulk: {kind: stirred, volume: 700 L, to: product, exchange: {corner: 1.5 L/min}}
  corner: {kind: stirred, volume: 200 L}
  sump: {kind: dead, volume: 100 L}
outlets: [product]
`;

export const broken = `network: Broken
format: 1
feeds: {feed: {flow: 10 L/min, to: {bulk: 60 %, product: 50 %}}}
compartments:
  bulk: {kind: stirred, volume: 100 L, to: product}
outlets: [product]
`;

export const pulse = `trial: Pulse
format: 1
injection: {at: feed, pulse: 50 g}
readings:
  - at: product
    file: pulse.csv
    time: {column: t, unit: min}
    value: {column: c, unit: g/L}
`;

/** What the tank gives after 50 g: c = 0.5 g/L exp(-t/tau) with tau = 8 min in place of 10, to 6 digits. */
export const pulseCsv = `t,c\n${Array.from({ length: 40 }, (_, i) => `${i},${((50 / 80) * Math.exp(-i / 8)).toFixed(6)}`).join("\n")}\n`;

export const files = {
  "tank.yaml": tank,
  "tube.yaml": tube,
  "vessel.yaml": vessel,
  "broken.yaml": broken,
  "pulse.yaml": pulse,
  "pulse.csv": pulseCsv,
};
