/** Starts the page on a bridge: first the sheet, then everything that follows it. */
import { render } from "preact";
import { App } from "./app";
import { examples } from "./examples";
import { openText, sheetInLink } from "./state/files";
import { keepTime } from "./state/health";
import { broken } from "./state/answers";
import { keepKeys } from "./state/keys";
import { keepPrefs } from "./state/prefs";
import { keepSavedWords, savedAt } from "./state/saved";
import { keepSaving, openStore } from "./state/store";
import { loadTables } from "./state/tables";
import { work, type Bridge } from "./state/work";

/** Shows the page at once; it comes alive with the bridge. */
export async function start(root: HTMLElement, bridge: Promise<Bridge>): Promise<void> {
  keepPrefs();
  render(<App />, root);
  const [newest, engine] = await Promise.all([openStore(), bridge]);
  work(engine);
  const linked = sheetInLink(location.hash);
  const wrong =
    linked !== null
      ? await openText(linked, "")
      : newest !== null
        ? await openText(newest.text, "")
        : await openText(examples[0]?.text ?? "", "");
  if (wrong !== "") {
    await openText(examples[0]?.text ?? "", "");
    broken.value = `what was to be opened could not be: ${wrong}`;
  } else if (linked === null && newest !== null) savedAt.value = newest.at;
  keepSaving();
  keepTime();
  keepSavedWords();
  keepKeys();
  await loadTables();
}
