import { randomNetworksHold } from "./random-engines.js";

// A quarter of the networks: the four files run side by side.
randomNetworksHold(3, 4);
