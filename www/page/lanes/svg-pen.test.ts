import { describe, expect, it } from "vitest";
import { escaped, SvgPen } from "./svg-pen";

describe("the SVG pen", () => {
  it("writes a stroke with its colour, width and dash", () => {
    const pen = new SvgPen("a");
    pen.strokeStyle = "#123456";
    pen.lineWidth = 2;
    pen.setLineDash([7, 4]);
    pen.beginPath();
    pen.moveTo(1, 2);
    pen.lineTo(3.004, 4);
    pen.stroke();
    expect(pen.text()).toBe('<path d="M1 2L3 4" fill="none" stroke="#123456" stroke-width="2" stroke-linejoin="miter" stroke-dasharray="7 4"/>');
  });

  it("clips until it is told to go back", () => {
    const pen = new SvgPen("a");
    pen.save();
    pen.beginPath();
    pen.rect(0, 0, 10, 5);
    pen.clip();
    pen.fillRect(1, 1, 2, 2);
    pen.restore();
    pen.fillRect(3, 3, 2, 2);
    const [clip, inside, outside] = pen.text().split("\n");
    expect(clip).toBe('<clipPath id="a-1"><path d="M0 0h10v5h-10Z"/></clipPath>');
    expect(inside).toContain("url(#a-1)");
    expect(outside).not.toContain("clip-path");
  });

  it("skips what is no number", () => {
    const pen = new SvgPen("a");
    pen.beginPath();
    pen.moveTo(0, 0);
    pen.lineTo(1, Number.NaN);
    pen.lineTo(2, 2);
    pen.stroke();
    expect(pen.text()).toContain('d="M0 0L2 2"');
  });

  it("does not let text end an attribute or open a tag", () => {
    expect(escaped('<a href="x">&')).toBe("&#60;a href=&#34;x&#34;&#62;&#38;");
  });
});
