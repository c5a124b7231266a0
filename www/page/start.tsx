/** Starts the page on a bridge: first the sheet, then everything that follows it. */
import { render } from "preact";
import { App } from "./app";
import { examples } from "./examples";
import { keepPlanning } from "./plan/make";
import { broken } from "./state/answers";
import { keepComparing } from "./state/compare";
import { openText, sheetInLink } from "./state/files";
import { keepTime } from "./state/health";
import { keepInstalled } from "./state/installed";
import { keepKeys } from "./state/keys";
import { keepLookingForOthers } from "./state/others";
import { keepPrefs } from "./state/prefs";
import { keepSavedWords, savedAt } from "./state/saved";
import { keepSaving, openStore } from "./state/store";
import { loadTables } from "./state/tables";
import { work, type Bridge } from "./state/work";

/** Shows the page at once; it comes alive with the bridge. */
export async function start(root: HTMLElement, bridge: Promise<Bridge>): Promise<void> {
  keepPrefs();
  render(<App />, root);
  try {
    const [newest, engine] = await Promise.all([openStore(), bridge]);
    work(engine);
    await openFirst(newest?.text ?? null, newest?.at ?? 0);
  } catch (reason) {
    broken.value = `This browser does not start the calculation: ${reason instanceof Error ? reason.message : String(reason)}`;
    return;
  }
  keepComparing();
  keepLookingForOthers();
  keepPlanning();
  keepSaving();
  keepTime();
  keepSavedWords();
  keepKeys();
  void keepInstalled();
  await loadTables();
}

/** The sheet in the link, else the newest saved one, else the invented example; what cannot be read is said. */
async function openFirst(saved: string | null, at: number): Promise<void> {
  const example = examples[0]?.text ?? "";
  let wrong = "";
  try {
    const linked = sheetInLink(location.hash);
    wrong = await openText(linked ?? saved ?? example, "");
    if (wrong === "" && linked === null && saved !== null) savedAt.value = at;
  } catch (reason) {
    wrong = reason instanceof Error ? reason.message : String(reason);
  }
  if (wrong === "") return;
  await openText(saved !== null && location.hash !== "" ? saved : example, "");
  broken.value = `What was to be opened first could not be read: ${wrong}`;
}
