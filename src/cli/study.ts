export function study(): never {
  throw new Error("x");
}
