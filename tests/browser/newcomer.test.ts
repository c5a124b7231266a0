// Somebody who has never seen the page: from the empty sheet over a plan and five points to a fit and a printed
// hand-over, with what the page itself says and nothing else; at a desk and on a tablet.
import { By, Key, type WebDriver, type WebElement } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, field, press, text, type, until } from "./support/hand";
import { fromFile, outgoing } from "./support/page";
import { afresh } from "./support/speed";

/** Five points as the hypothesis that is typed in below would give them, read off its curve: W, luminosity, counts. */
const POINTS = [
  ["2871.0 MeV", "97.2", "25"],
  ["2873.2 MeV", "97.2", "530"],
  ["2874.4 MeV", "97.2", "1115"],
  ["2875.2 MeV", "97.2", "530"],
  ["2878.0 MeV", "97.2", "16"],
] as const;

describe.each(engines)("a newcomer in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());

  const fill = async (path: string, value: string): Promise<void> => type(driver, await field(driver, path), value);
  const choose = async (label: string, words: string): Promise<void> => {
    const found = By.xpath(`//label[normalize-space()="${label}"]/following-sibling::select/option[contains(., "${words}")]`);
    const option = (await driver.wait(async () => (await driver.findElements(found))[0] ?? null, 10_000, `no ${words} in ${label}`)) as NonNullable<unknown> as WebElement;
    await driver.executeScript("arguments[0].parentElement.scrollIntoView({ block: 'center' })", option);
    await option.click();
  };

  it.each([
    ["desk", 1280, 900],
    ["tablet", 820, 1180],
  ] as const)("goes from the empty page to the printed hand-over: %s", async (_where, width, height) => {
    await driver.manage().window().setRect({ width, height });
    await afresh(driver);

    // The first steps say where a new sheet is.
    expect(await text(driver, ".first-steps")).toMatch(/A new sheet is in\s+Sheet/);
    await enter(driver, "Sheet");
    await press(driver, "New sheet");
    await until(driver, "not empty", "return /No points yet/.test(document.querySelector('.points').innerText)");
    await type(driver, (await driver.findElement(By.id("sheet-title"))) as never, "First scan");

    await enter(driver, "Beam");
    await fill("beam.first.name", "e-");
    await fill("beam.second.name", "e+");
    await choose("The dial shows", "W");
    await choose("Shape", "Gaussian in W");
    await fill("beam.spread.first", "0.71 MeV");
    await fill("beam.luminosity", "9.0e30 cm^-2 s^-1");

    await enter(driver, "Model");
    await fill("model.resonances[0].mass", "2874.2 MeV");
    await fill("model.resonances[0].width", "0.62 MeV");
    await fill("model.resonances[0].strength.value", "24.6 eV");
    await enter(driver, "Detection");
    await fill("detection.efficiency", "0.42");
    await until(driver, "no curve", "return document.querySelector('.read-out dd') !== null && /nb/.test(document.querySelector('.read-out').innerText)");
    expect(await text(driver, ".stripe-bad")).toBe("");

    // A plan of the hours to come.
    await enter(driver, "Fit");
    for (const name of ["Mass", "Width"]) {
      const box = await driver.findElement(By.xpath(`//tr[contains(., "${name}")]//input[@type="checkbox"]`));
      if (!(await box.isSelected())) await driver.executeScript("arguments[0].click()", box);
    }
    await enter(driver, "Plan");
    await fill("plan.hours", "24 h");
    await fill("plan.from", "2868 MeV");
    await fill("plan.to", "2880 MeV");
    await press(driver, "Plan the hours left");
    // It says itself what it still has to know.
    await until(driver, "not told what is missing", "return /step of W/.test(document.querySelector('.room .problem').innerText)");
    await fill("plan.step", "0.2 MeV");
    await fill("plan.dwell_step", "1 h");
    await fill("plan.least_dwell", "1 h");
    await press(driver, "Plan the hours left");
    await until(driver, "no plan", "return /\\d/.test(document.querySelector('.cell-next .figure').innerText)");

    // Five points, as they come.
    await enter(driver, "Shift");
    for (const [setting, luminosity, counts] of POINTS) {
      const dial = await driver.findElement(By.css(".entry input.big"));
      await type(driver, dial as never, setting);
      await (await driver.switchTo().activeElement()).sendKeys(Key.ENTER);
      await until(driver, "no running point", "return document.querySelector('.entry input[name=n]') !== null");
      await type(driver, (await driver.findElement(By.css(".entry input[name=n]"))) as never, counts);
      await (await driver.switchTo().activeElement()).sendKeys(Key.TAB);
      await (await driver.switchTo().activeElement()).sendKeys(luminosity, Key.ENTER);
      await press(driver, "Close P");
      await until(driver, "still running", "return document.querySelector('.entry input[name=n]') === null");
    }

    // The fit follows by itself.
    await until(driver, "no fit", "return /287\\d\\.\\d/.test(document.querySelector('.cell-results')?.innerText ?? '')");
    await enter(driver, "Fit");
    await until(driver, "no result", "return document.querySelectorAll('.results tbody tr').length === 2");
    const mass = await driver.executeScript<number>("return Number(document.querySelector('.results tbody td').innerText.replace(/[^\\d.]/g, ''))");
    expect(mass).toBeGreaterThan(2873.7);
    expect(mass).toBeLessThan(2874.7);

    await enter(driver, "Sheet");
    await press(driver, "Hand-over page");
    await until(driver, "no paper", "return document.querySelectorAll('.paper canvas').length === 3");
    const paper = await text(driver, ".paper");
    for (const part of ["First scan", "Results", "Plan", "Points", "Assumptions", "Energy scale", "Cautions"]) expect(paper).toContain(part);
    // The window's own: what a script of the driver calls global is, in Firefox, not the page's.
    await driver.executeScript("window.print = () => { window.printed = true; }");
    await press(driver, "Print");
    await until(driver, "not printed", "return window.printed === true");
    await driver.findElement(By.css("dialog[open]")).sendKeys(Key.ESCAPE);
    expect((await outgoing(driver, fromFile)).filter((address) => address !== `${fromFile}?fresh`)).toEqual([]);
  }, 240_000);
});
