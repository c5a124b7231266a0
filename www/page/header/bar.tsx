/** Top bar: what sheet this is, whether it is invented, where it is saved, undo and redo, light. */
import type { JSX } from "preact";
import { Icon } from "../parts/icon";
import { theme, type Theme } from "../state/prefs";
import { savedWords } from "../state/saved";
import { redo, redoable, sheet, setField, undo, undoable } from "../state/sheet";

const THEMES: readonly (readonly [Theme, string])[] = [
  ["", "As the system"],
  ["light", "Light"],
  ["dark", "Dark"],
  ["dim", "Dim (control room)"],
];

/** The bar. */
export function Bar(): JSX.Element {
  return (
    <header class="bar">
      <p class="brand">Widthwise</p>
      <h1 class="title">
        <label class="unseen" for="sheet-title">
          Title of the sheet
        </label>
        <input
          id="sheet-title"
          type="text"
          autocomplete="off"
          value={sheet.value.title}
          placeholder="Untitled sheet"
          onInput={(event) => setField("title", event.currentTarget.value, "title")}
        />
      </h1>
      {sheet.value.invented && (
        <p class="mark" title="Facility, state and counts of this sheet are invented">
          Invented demo
        </p>
      )}
      <p class="saved note" role="status">
        {savedWords.value}
      </p>
      <div class="tools" role="group" aria-label="History">
        <button type="button" class="tool" disabled={undoable.value === ""} onClick={undo} aria-label={undoable.value === "" ? "Undo" : `Undo: ${undoable.value}`} title={undoable.value}>
          <Icon name="undo" />
        </button>
        <button type="button" class="tool" disabled={redoable.value === ""} onClick={redo} aria-label={redoable.value === "" ? "Redo" : `Redo: ${redoable.value}`} title={redoable.value}>
          <Icon name="redo" />
        </button>
      </div>
      <label class="unseen" for="theme">
        Light
      </label>
      <select id="theme" class="theme" value={theme.value} onChange={(event) => (theme.value = event.currentTarget.value as Theme)}>
        {THEMES.map(([key, text]) => (
          <option key={key} value={key}>
            {text}
          </option>
        ))}
      </select>
    </header>
  );
}
