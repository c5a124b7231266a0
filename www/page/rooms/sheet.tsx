/** Sheet: open, save, take away, hand over; versions to go back to; examples. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { ReadCodes } from "../carry/read";
import { ShowCodes } from "../carry/show";
import { ago } from "../format/number";
import { examples } from "../examples";
import { picture } from "../lanes/picture";
import { lanesAsSvg } from "../lanes/svg";
import { handOver } from "../hand-over/hand-over";
import { Icon } from "../parts/icon";
import { copy, download, fileName, linkOf, openText, saveSheet, tableText } from "../state/files";
import { blankSheet } from "../state/blank";
import { Checked } from "./checked";
import { Compare } from "./compare";
import { Keys } from "./keys";
import { open, setField, sheet } from "../state/sheet";
import { versions } from "../state/store";
import type { Table } from "../state/types";

/** The room. */
export function SheetRoom(): JSX.Element {
  const told = useSignal("");
  const text = useSignal("");
  const opening = async (content: string, did: string): Promise<void> => {
    const wrong = await openText(content, did);
    told.value = wrong === "" ? "Opened. Undo brings the sheet before it back." : `Not opened: ${wrong}`;
  };
  const csv = async (table: Table, name: string): Promise<void> => {
    try {
      download(fileName(name, "csv"), new Blob([await tableText(table)], { type: "text/csv" }));
    } catch (reason) {
      told.value = reason instanceof Error ? reason.message : String(reason);
    }
  };
  const toClipboard = async (content: string, what: string): Promise<void> => {
    if (await copy(content)) told.value = `${what} copied.`;
    else {
      text.value = content;
      told.value = "This browser does not let the page copy. Select the text below.";
    }
  };
  return (
    <>
      <p class="told" role="status">
        {told.value}
      </p>
      {text.value !== "" && <textarea rows={4} readOnly aria-label="Text to copy" value={text.value} />}
      <fieldset>
        <legend>File</legend>
        <div class="buttons">
          <button type="button" class="button button-main" onClick={saveSheet}>
            <Icon name="save" /> Save to a file
          </button>
          <label class="button">
            <Icon name="file" /> Open a file
            <input
              class="unseen"
              type="file"
              accept=".json,application/json"
              onChange={(event) => {
                const file = event.currentTarget.files?.[0];
                event.currentTarget.value = "";
                void file?.text().then((content) => opening(content, `open ${file.name}`));
              }}
            />
          </label>
          <button type="button" class="button" onClick={() => void toClipboard(linkOf(sheet.peek()), "Link")}>
            <Icon name="copy" /> Copy a link with this sheet in it
          </button>
          <button
            type="button"
            class="button"
            onClick={() => {
              open(blankSheet(), "new sheet");
              told.value = "A new, empty sheet. Undo brings the one before it back.";
            }}
          >
            <Icon name="plus" /> New sheet
          </button>
        </div>
      </fieldset>
      <fieldset>
        <legend>Without network or stick</legend>
        <ShowCodes />
        <ReadCodes />
      </fieldset>
      <fieldset>
        <legend>Take away</legend>
        <div class="buttons">
          <button type="button" class="button" onClick={() => void csv("rows", "points")}>
            Points, CSV
          </button>
          <button type="button" class="button" onClick={() => void csv("curve", "curve")}>
            Curve, CSV
          </button>
          <button type="button" class="button" onClick={() => void csv("fit", "fit")}>
            Fit, CSV
          </button>
          <button type="button" class="button" onClick={() => void picture().then((image) => image && download(fileName("plot", "png"), image))}>
            <Icon name="image" /> Plot, PNG
          </button>
          <button type="button" class="button" onClick={() => download(fileName("plot", "svg"), new Blob([lanesAsSvg()], { type: "image/svg+xml" }))}>
            <Icon name="image" /> Plot, SVG
          </button>
          <button type="button" class="button" onClick={() => void tableText("log").then((content) => toClipboard(content, "Log text"), (reason: unknown) => (told.value = String(reason)))}>
            <Icon name="copy" /> Copy log text
          </button>
          <button type="button" class="button" onClick={() => (handOver.value = true)}>
            <Icon name="print" /> Hand-over page
          </button>
        </div>
      </fieldset>
      <fieldset>
        <legend>
          <label for="sheet-note">Note for the next shift</label>
        </legend>
        <textarea id="sheet-note" rows={4} value={sheet.value.note} onInput={(event) => setField("note", event.currentTarget.value, "note")} />
      </fieldset>
      <fieldset>
        <legend>Invented examples</legend>
        <ul class="list">
          {examples.map((example) => (
            <li key={example.title}>
              <button type="button" class="link" onClick={() => void opening(example.text, `open ${example.title}`)}>
                {example.title}
              </button>
              <span class="note"> {example.about}</span>
            </li>
          ))}
        </ul>
      </fieldset>
      <Compare />
      <fieldset>
        <legend>Versions in this browser</legend>
        {versions.value.length === 0 ? (
          <p class="empty">None yet. One is kept at least every two minutes while you work.</p>
        ) : (
          <ul class="list">
            {versions.value.slice(0, 12).map((version) => (
              <li key={`${version.key}${version.tab}`}>
                <button type="button" class="link" onClick={() => void opening(version.text, `go back to a version`)}>
                  {new Date(version.at).toLocaleString(undefined, { hourCycle: "h23" })}
                </button>
                <span class="note">
                  {" "}
                  {version.title || "Untitled sheet"}, {ago(Date.now() - version.at)}
                </span>
              </li>
            ))}
          </ul>
        )}
      </fieldset>
      <Keys />
      <Checked />
    </>
  );
}
