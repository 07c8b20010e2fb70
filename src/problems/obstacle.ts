/** What stands in the way of reading what a path leads to. */
export type Obstacle = "folder" | "device" | "loop" | "denied" | "dangling" | "other";

/** Each in words, after the name of the file. */
export const obstacleWords: Readonly<Record<Obstacle, string>> = {
  folder: "is a folder, not a file",
  device: "is a device or a pipe, not a file",
  loop: "is a link that leads back to itself",
  denied: "may not be read",
  dangling: "is a link that leads nowhere",
  other: "cannot be read",
};
