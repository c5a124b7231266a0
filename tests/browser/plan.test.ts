// The plan room on the invented example: asked by hand, accepted with one click, made again after a point, tried out.
import { By, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { button, enter, field, press, settled, text, type } from "./support/hand";
import { fromFile, load } from "./support/page";

/** Plans and trials are long work, on a machine that may be busy. */
const PATIENCE_MS = 240_000;

describe.each(engines)("the plan room in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Plan");
  });
  afterAll(() => driver?.quit());

  const cells = (table: string) =>
    driver.executeScript<string[][]>(
      "return [...document.querySelectorAll(arguments[0] + ' tbody tr')].map((row) => [...row.cells].map((cell) => cell.innerText))",
      table,
    );
  const appears = (selector: string) =>
    driver.wait(async () => (await text(driver, selector)) !== "", PATIENCE_MS, `${selector} did not appear`);
  const idle = () => driver.wait(async () => (await driver.findElements(By.css("progress"))).length === 0, PATIENCE_MS, "it is still at work");
  const number = (value: string | undefined) => Number.parseFloat((value ?? "").replace("−", "-"));
  const choose = (label: string, value: string) =>
    driver.executeScript(
      `const of = [...document.querySelectorAll('label')].find((label) => label.innerText === arguments[0]);
       const select = document.getElementById(of.htmlFor);
       select.value = arguments[1];
       select.dispatchEvent(new Event('change', { bubbles: true }));`,
      label,
      value,
    );

  it("says before anything else who changes the beam, and what is not modelled", async () => {
    const room = await text(driver, "[data-room=plan]");
    expect(room).toContain("made by the accelerator's operators under the facility's procedures");
    expect(room).toContain("Radiation and machine protection are not modelled");
  });

  it(
    "plans the hours left: numbers to dial by the clock, errors, guarantee, the curve in its lane",
    async () => {
      await choose("Least error of", "r1.mass");
      await press(driver, "Plan the hours left");
      await appears(".timetable tbody");
      const stops = await cells(".timetable");
      for (const stop of stops) {
        expect(stop[0]).toMatch(/^[A-Z][a-z]{2} \d\d:\d\d$/);
        expect(stop[1]).toMatch(/^14\d\d\.\d+ MeV$/);
        expect(stop[4]).toMatch(/\w+/);
      }
      const errors = await cells(".forecasts");
      const mass = errors[0] ?? [];
      expect(mass[0]).toContain("goal");
      // Scenario of the example: the error of the mass is 63 keV, a floor of 60 keV per fill stays.
      expect(number(mass[1])).toBeGreaterThan(0.05);
      expect(number(mass[2])).toBeLessThan(number(mass[1]));
      expect(number(mass[2])).toBeLessThanOrEqual(number(mass[3]));
      expect(number(mass[4])).toBeLessThan(number(mass[2]));
      const guarantee = await cells(".guarantee");
      expect(number(guarantee[0]?.[1])).toBeGreaterThanOrEqual(0.999);
      expect(number(guarantee[1]?.[1])).toBeGreaterThan(50);
      expect(guarantee.some((row) => row[0]?.includes("mass is off"))).toBe(true);
      expect(await driver.findElements(By.css('[data-lane="information"] canvas'))).toHaveLength(1);
      expect(await text(driver, '[data-lane="beam-time"] figcaption')).toContain("planned");
      expect(await driver.findElements(By.css("[data-room=plan] svg.plot"))).toHaveLength(1);
    },
    PATIENCE_MS,
  );

  it(
    "says what each demand costs, one number each",
    async () => {
      await press(driver, "What each demand costs");
      await driver.wait(async () => (await cells(".guarantee")).some((row) => row[0]?.startsWith("Cost of")), PATIENCE_MS, "no costs");
      const costs = (await cells(".guarantee")).filter((row) => row[0]?.startsWith("Cost of"));
      for (const word of ["dwell", "settling", "order", "not knowing"]) {
        expect(costs.filter((row) => row[0]?.includes(word))).toHaveLength(1);
      }
      for (const cost of costs) expect(cost[1]).toMatch(/^\d+\.\d\s?%$/);
    },
    PATIENCE_MS,
  );

  it(
    "shows the next setting with its reason on the shift, and starts it with one click",
    async () => {
      await enter(driver, "Shift");
      const dial = await text(driver, ".dial-line .figure");
      expect(dial).toMatch(/^14\d\d\.\d+ MeV$/);
      expect((await text(driver, "[data-why]")).length).toBeGreaterThan(5);
      await press(driver, "Accept and start");
      await driver.wait(async () => (await text(driver, "legend")).startsWith("Running point"), 15_000, "no running point");
      expect(await text(driver, "legend")).toBe("Running point P13");
      const settings = await driver.executeScript<string[]>("return [...document.querySelectorAll('tbody input')].map((input) => input.value)");
      expect(settings.join(" ") + (await text(driver, "main"))).toContain(dial.split(" ")[0] ?? "?");
      // The stop is begun: another one is next.
      expect(await text(driver, ".dial-line .figure")).not.toBe("");
    },
    PATIENCE_MS,
  );

  it(
    "plans again after the point, says what changed, and weighs staying against moving",
    async () => {
      const input = async (name: string) => driver.findElement(By.css(`input[name=${name}]`));
      await type(driver, await input("l"), "60");
      await type(driver, await input("n"), "200");
      await press(driver, "Enter");
      await enter(driver, "Plan");
      await appears(".plan-changes");
      const changes = await text(driver, ".plan-changes");
      expect(changes).toMatch(/The next setting (stays|is)/);
      expect(changes).toMatch(/Keeping the old plan would lose \d+\.\d\s?%/);
      await idle();
      expect(await text(driver, "[data-stay]")).toMatch(/^(Stay|Move on)\./);
      expect(await (await field(driver, "plan.starts")).getAttribute("value")).toMatch(/^20\d\d-/);
    },
    PATIENCE_MS,
  );

  it(
    "tries the plan and equal times out: the errors found agree with those expected",
    async () => {
      await driver.executeScript("[...document.querySelectorAll('summary')].find((s) => s.innerText === 'Proof by experiment').click()");
      const count = await driver.executeScript<string>(
        "return [...document.querySelectorAll('label')].find((label) => label.innerText === 'Trials of each').htmlFor",
      );
      await type(driver, await driver.findElement(By.id(count)), "40");
      await press(driver, "Try it out");
      await appears(".proof tbody");
      for (const row of await cells(".proof")) {
        expect(number(row[2]) / number(row[1])).toBeGreaterThan(0.65);
        expect(number(row[2]) / number(row[1])).toBeLessThan(1.45);
        expect(number(row[4]) / number(row[3])).toBeGreaterThan(0.65);
        expect(number(row[4]) / number(row[3])).toBeLessThan(1.45);
      }
    },
    PATIENCE_MS,
  );

  it(
    "refuses what cannot be in a plain sentence, and stops when told to",
    async () => {
      await type(driver, await field(driver, "plan.hours_used"), "23.7 h");
      await press(driver, "Plan again");
      await driver.wait(async () => (await text(driver, "[data-room=plan] .problem:not(:empty)")) !== "", PATIENCE_MS, "no sentence");
      expect(await text(driver, "[data-room=plan] .problem:not(:empty)")).toContain("shorter than the least dwell");
      await type(driver, await field(driver, "plan.hours_used"), "");
      await press(driver, "Plan again");
      await press(driver, "Cancel");
      await idle();
      expect(await (await button(driver, "Plan again")).isEnabled()).toBe(true);
    },
    PATIENCE_MS,
  );

  it(
    "tells a rival hypothesis apart, and lays a comb",
    async () => {
      await choose("Aim", "tell");
      expect(await text(driver, "[data-room=plan]")).toContain("Both are the same now");
      await press(driver, "Plan again");
      await driver.wait(async () => (await text(driver, "[data-room=plan] .problem:not(:empty)")) !== "", PATIENCE_MS, "no sentence");
      expect(await text(driver, "[data-room=plan] .problem:not(:empty)")).toContain("cannot tell the two hypotheses apart");
      await choose("Aim", "find");
      await type(driver, await field(driver, "plan.comb.reach"), "4 MeV");
      await type(driver, await field(driver, "plan.comb.dwell"), "1 h");
      await press(driver, "Lay the comb");
      await appears("[aria-label=Comb] .figure");
      expect(await text(driver, "[aria-label=Comb] .figure")).toMatch(/^\d+\s?%$/);
      expect((await cells("[aria-label=Comb] .timetable")).length).toBeGreaterThan(2);
    },
    PATIENCE_MS,
  );

  it("forgets the plan when another sheet is opened", async () => {
    await choose("Aim", "measure");
    await enter(driver, "Sheet");
    await driver.executeScript("[...document.querySelectorAll('button')].find((b) => /Greyfell/.test(b.innerText)).click()");
    await enter(driver, "Plan");
    await driver.wait(async () => (await driver.findElements(By.css(".timetable"))).length === 0, 15_000, "the old plan is still there");
    expect(await (await button(driver, "Plan the hours left")).isEnabled()).toBe(true);
  });
});
