import { describe, expect, it } from "vitest";
import { at, steps, textAt, withAt } from "./path";

describe("paths of the document", () => {
  const sheet = { model: { resonances: [{ width: "1 MeV" }, { width: "2 MeV", phase: "3 deg" }] }, note: "" };

  it("are split as refusals write them", () => {
    expect(steps("model.resonances[1].width")).toEqual(["model", "resonances", 1, "width"]);
  });

  it("lead to the value, or nowhere without an error", () => {
    expect(at(sheet, "model.resonances[1].width")).toBe("2 MeV");
    expect(textAt(sheet, "model.nothing[7].here")).toBe("");
  });

  it("change a copy and share what is not on the way", () => {
    const next = withAt(sheet, "model.resonances[0].width", "5 MeV");
    expect(next.model.resonances[0]?.width).toBe("5 MeV");
    expect(sheet.model.resonances[0]?.width).toBe("1 MeV");
    expect(next.model.resonances[1]).toBe(sheet.model.resonances[1]);
  });

  it("take a field away with undefined", () => {
    const next = withAt(sheet, "model.resonances[1].phase", undefined);
    expect(next.model.resonances[1]).not.toHaveProperty("phase");
  });
});
