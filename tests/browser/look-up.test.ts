// Small sums of a shift, each a tap or two away and put into the sheet; what is behind every number; points that
// cannot be read.
import { By, Key, type WebDriver, type WebElement } from "selenium-webdriver";
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, field, press, text, type, until } from "./support/hand";
import { afresh } from "./support/speed";

describe.each(engines)("looking up in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());
  beforeEach(() => afresh(driver));

  /** Opens a sum by its title and types into its fields by their labels. */
  const sum = async (title: string, typed: Record<string, string>): Promise<void> => {
    const summary = await driver.findElement(By.xpath(`//details[contains(@class,'look-up')]/summary[normalize-space()="${title}"]`));
    await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' })", summary);
    await summary.click();
    for (const [label, value] of Object.entries(typed)) {
      const input = await driver.wait(
        async () => (await driver.findElements(By.xpath(`//details[summary[normalize-space()="${title}"]]//label[normalize-space()="${label}"]/following-sibling::input`)))[0] ?? null,
        5000,
        `no field ${label}`,
      );
      await type(driver, input as unknown as WebElement, value);
    }
  };
  /** A number of the open sum by its name. */
  const value = async (title: string, name: string): Promise<string> => {
    const find = "const part = [...document.querySelectorAll('details.look-up')].find((one) => one.querySelector('summary').textContent === arguments[0]); const line = [...part.querySelectorAll('.digits li')].find((one) => one.querySelector('.note').textContent === arguments[1]);";
    await until(driver, `no ${name}`, `${find} return line !== undefined;`, title, name);
    return driver.executeScript<string>(`${find} return line.querySelector('.value').innerText.replace(/,? why/, '').trim();`, title, name);
  };

  it("knows thresholds and momenta", async () => {
    await enter(driver, "Look up");
    await sum("Threshold and break-up momentum", { First: "p", Second: "pbar", "at W": "3096.900 MeV" });
    // Particle Data Group, summary table of the J/psi: p = 1232 MeV/c for p pbar.
    expect(await value("Threshold and break-up momentum", "break-up momentum")).toMatch(/^1\.23[12]\d* GeV\/c/);
    expect(await value("Threshold and break-up momentum", "threshold")).toMatch(/^1\.876544\d* GeV/);
  });

  it("turns a coupling into a width and a lifetime", async () => {
    await enter(driver, "Look up");
    await sum("Coupling, width, lifetime", { "Mass of the state": "47.3042 GeV", "Decays into a pair of": "mu-", Value: "4.0e-4" });
    // The invented muon ring: 0.301 keV.
    expect(await value("Coupling, width, lifetime", "width")).toMatch(/^0\.301\d* keV/);
    expect(await value("Coupling, width, lifetime", "lifetime")).toMatch(/^2\.18\d*e-18 s/);
  });

  it("says what is wrong with a value and keeps it", async () => {
    await enter(driver, "Look up");
    await sum("Peak cross section", { Mass: "heavy", "Bin · Bf": "4e-5" });
    await until(driver, "no message", "return [...document.querySelectorAll('details.look-up .problem')].some((one) => one.innerText.length > 0)");
    expect(await driver.executeScript("return [...document.querySelectorAll('details.look-up input')].some((one) => one.value === 'heavy' && one.getAttribute('aria-invalid') === 'true')")).toBe(true);
  });

  it("gives the time to so many events, and puts it into the sheet", async () => {
    await enter(driver, "Look up");
    await sum("Rate, and time to so many events", { "Observed cross section": "14.76 nb", Background: "0 /h", "Events wanted": "10000" });
    // 32.4 nb^-1/h x 0.42 x 14.76 nb = 200.9 an hour, by hand.
    expect(await value("Rate, and time to so many events", "time to the events")).toMatch(/^49\.79 h|^2 d/);
    const use = await driver.findElement(By.xpath("//li[span[normalize-space()='time to the events']]/select/option[contains(., 'Plan: hours')]"));
    await use.click();
    await until(driver, "not told", "return /Undo takes it back/.test(document.querySelector('.room').innerText)");
    await enter(driver, "Plan");
    expect(await (await field(driver, "plan.hours")).getAttribute("value")).toMatch(/^49\.79 h/);
    await driver.findElement(By.css("body")).sendKeys(Key.chord(Key.CONTROL, "z"));
    await until(driver, "undo did nothing", "return document.querySelector('[data-path=\"plan.hours\"]').value === '24 h'");
  });

  it("finds a particle as it is typed, and makes a beam of it", async () => {
    await enter(driver, "Look up");
    await type(driver, (await driver.findElement(By.id("look-up-particle"))) as unknown as WebElement, "mu");
    await until(driver, "too many", "const rows = [...document.querySelectorAll('.room tbody th')]; return rows.length > 0 && rows.every((row) => /mu/i.test(row.innerText))");
    await driver.findElement(By.xpath("//tr[th[normalize-space()='mu+']]//option[normalize-space()='Beam 1']")).click();
    await enter(driver, "Beam");
    expect(await (await field(driver, "beam.first.name")).getAttribute("value")).toBe("mu+");
  });

  it("opens formula, inputs, accuracy and source behind every number that is shown", async () => {
    await driver.findElement(By.css(".data tbody tr:last-child button[aria-label$='is running']")).click();
    await until(driver, "no running point", "return document.querySelectorAll('.trio .why').length === 2");
    await press(driver, "More");
    const numbers = await driver.executeScript<number>("return document.querySelectorAll('.strip .why, .read-out .why, .trio .why, .data tbody tr:first-child .why').length");
    expect(numbers).toBeGreaterThan(18);
    for (let i = 0; i < numbers; i += 1) {
      const name = await driver.executeScript<string>("const one = document.querySelectorAll('.strip .why, .read-out .why, .trio .why, .data tbody tr:first-child .why')[arguments[0]]; if (/enter counts/.test(one.textContent)) return 'entry'; one.click(); return one.textContent;", i);
      if (name === "entry") continue;
      await until(driver, `nothing behind ${name}`, "return document.querySelector('dialog[open] .inputs') !== null");
      const inside = await driver.executeScript<{ formula: boolean; inputs: number; words: string }>(
        "const shown = document.querySelector('dialog[open]'); return { formula: shown.querySelector('math *') !== null, inputs: shown.querySelectorAll('.inputs dd').length, words: shown.innerText };",
      );
      expect(inside.formula, name).toBe(true);
      expect(inside.inputs, name).toBeGreaterThan(2);
      expect(inside.words, name).toMatch(/Accuracy/);
      await driver.executeScript("document.querySelector('dialog[open]').close()");
      await until(driver, "it stayed open", "return document.querySelector('dialog[open]') === null");
    }
  });

  it("does not pass over a point whose energy cannot be read", async () => {
    const path = "[data-path='data.rows[5].setting']";
    await type(driver, await field(driver, "data.rows[5].setting"), "full speed");
    await type(driver, await field(driver, "data.rows[5].w"), "");
    await until(driver, "not said at the row", "return /no energy/.test(document.querySelector(arguments[0]).closest('tr').innerText)", path);
    await until(driver, "not said in the stripe", "return /A6/.test(document.querySelector('.stripe-place').innerText) || /rows 6/.test(document.querySelector('.stripe-place').innerText)");
    expect(await text(driver, ".stripe-place")).toMatch(/energy|setting/i);
  });

  it("takes a spread from a table", async () => {
    await enter(driver, "Beam");
    await driver.findElement(By.xpath("//label[normalize-space()='Shape']/following-sibling::select/option[contains(., 'Tabulated')]")).click();
    const box = await driver.wait(async () => (await driver.findElements(By.id("spread-table")))[0] ?? null, 5000, "no table");
    const before = await driver.executeScript<string>("return document.querySelector('.read-out').innerText");
    await type(driver, box as unknown as WebElement, "-2 MeV; 0\n0 MeV; 1\n2 MeV; 0");
    await driver.executeScript("arguments[0].blur()", box);
    await until(driver, "the curve did not follow", "return document.querySelector('.read-out').innerText !== arguments[0] && document.querySelector('.stripe-bad') === null && !/Still needed/.test(document.querySelector('.stripe-place').innerText)", before);
  });
});
