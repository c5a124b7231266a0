import { describe, expect, it } from "vitest";
import { differences } from "./compare";

describe("two sheets side by side", () => {
  const here = { title: "a", model: { resonances: [{ width: "1 MeV" }] }, data: { rows: [{ id: "P1", counts: "5" }] } };

  it("list the fields in which they differ, by their path", () => {
    const there = { title: "a", model: { resonances: [{ width: "2 MeV" }] }, data: { rows: [{ id: "P1" }] } };
    expect(differences(here, there)).toEqual([
      { path: "model.resonances[0].width", here: "1 MeV", there: "2 MeV" },
      { path: "data.rows[0].counts", here: "5", there: "" },
    ]);
  });

  it("are the same where only an absent field is spelt out", () => {
    expect(differences({ a: null, b: false }, {})).toEqual([]);
    expect(differences(here, structuredClone(here))).toEqual([]);
  });

  it("stop after so many", () => {
    expect(differences({ a: "1", b: "2", c: "3" }, {}, 2)).toHaveLength(2);
  });
});
