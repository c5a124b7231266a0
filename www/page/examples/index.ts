/** Invented examples: facilities, states and counts do not exist, and each sheet says so. The sheets are the core's own. */
import greyfell from "../../../crates/sheet/demos/greyfell.json?raw";
import ostrel from "../../../crates/sheet/demos/ostrel.json?raw";
import saltmere from "../../../crates/sheet/demos/saltmere.json?raw";

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
  {
    title: "Greyfell: two hills, four numbers",
    about: "Antiprotons on a hydrogen jet: two overlapping states, and a second solution with the same curve.",
    text: greyfell,
  },
  {
    title: "Ostrel: is it there at all?",
    about: "A muon ring looks for a narrow scalar with a handful of events.",
    text: ostrel,
  },
];
