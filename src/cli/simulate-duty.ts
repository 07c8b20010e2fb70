export function simulateDuty(): never {
  throw new Error("x");
}
