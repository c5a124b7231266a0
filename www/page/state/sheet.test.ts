import { beforeEach, describe, expect, it } from "vitest";
import { change, open, redo, redoable, setField, sheet, undo, undoable } from "./sheet";
import type { Sheet } from "./types";

const empty = { title: "one", note: "", data: { rows: [] } } as unknown as Sheet;

describe("the document's history", () => {
  beforeEach(() => open(empty));

  it("takes back and does again what was done, by name", () => {
    change("rename", (before) => ({ ...before, title: "two" }));
    expect(undoable.value).toBe("rename");
    undo();
    expect(sheet.value.title).toBe("one");
    expect(redoable.value).toBe("rename");
    redo();
    expect(sheet.value.title).toBe("two");
  });

  it("makes one step of a drag or of a word being typed", () => {
    for (const title of ["t", "ti", "tit"]) setField("title", title, "title");
    undo();
    expect(sheet.value.title).toBe("one");
  });

  it("keeps steps of different fields apart", () => {
    setField("title", "two", "title");
    setField("note", "three", "note");
    undo();
    expect(sheet.value).toMatchObject({ title: "two", note: "" });
  });

  it("forgets what was taken back once something else is done", () => {
    setField("title", "two", "title");
    undo();
    setField("note", "x", "note");
    expect(redoable.value).toBe("");
  });
});
