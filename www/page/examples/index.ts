/** Invented examples: facility, states and counts do not exist, and each sheet says so. */
import saltmere from "./saltmere.json?raw";

/** One example. */
export interface Example {
  title: string;
  about: string;
  text: string;
}

/** The first is the one that the page opens on. */
export const examples: readonly Example[] = [
  {
    title: "Saltmere: one fill is not twelve points",
    about: "A narrow vector state at an e⁺e⁻ ring: dip, peak, and an energy error common to a fill.",
    text: saltmere,
  },
];
