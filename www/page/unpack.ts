/**
 * The page's own program travels packed, as its engine does: a third of the size in a file with a budget. This small
 * script unpacks and runs it. The policy names the hash of both, so that nothing else can be run in its place.
 */
import { inflateSync, strFromU8 } from "fflate";
import { decode85 } from "./bridge/base85";

const script = document.createElement("script");
script.textContent = strFromU8(inflateSync(decode85(document.getElementById("page-program")?.textContent?.trim() ?? "")));
// In a task of its own, so that neither is a long one.
setTimeout(() => document.body.append(script));
