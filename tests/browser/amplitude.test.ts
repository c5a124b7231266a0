// The amplitude behind the curve: every kind of hypothesis chosen and drawn in the page, on an invented example.
import { By, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, field, press, settled, text, type, until } from "./support/hand";
import { fromFile, load } from "./support/page";

const PATIENCE_MS = 120_000;

describe.each(engines)("the amplitude in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Model");
    await press(driver, "Amplitude");
  }, PATIENCE_MS);
  afterAll(() => driver?.quit());

  /** Chooses in the select of a label; React-like pages hear "change" only. */
  const choose = (label: string, value: string) =>
    driver.executeScript(
      `const label = [...document.querySelectorAll('label')].find((one) => one.innerText.trim() === arguments[0]);
       const select = document.getElementById(label.htmlFor);
       select.value = arguments[1];
       select.dispatchEvent(new Event('change', { bubbles: true }));`,
      label,
      value,
    );
  const coloured = (selector: string) =>
    driver.executeScript<number>(
      `const canvas = document.querySelector(arguments[0]);
       if (!canvas || canvas.width === 0) return 0;
       const { data } = canvas.getContext('2d').getImageData(0, 0, canvas.width, canvas.height);
       const seen = new Set();
       for (let i = 0; i < data.length; i += 4) if (data[i + 3] > 0) seen.add((data[i] << 16) | (data[i + 1] << 8) | data[i + 2]);
       return seen.size;`,
      selector,
    );
  const drawn = (what: string, selector: string, colours: number) =>
    driver.wait(async () => (await coloured(selector)) >= colours, PATIENCE_MS, `${what} was not drawn`);
  const noProblem = async () => expect(await text(driver, ".amplitude > .problem")).toBe("");

  it(
    "shows propagator, Argand path, complex plane and pole of the sheet's resonance",
    async () => {
      await until(driver, "no lanes", "return document.querySelectorAll('[data-lane^=amplitude] canvas').length >= 3");
      await drawn("the Argand path", ".panes figure:nth-child(1) canvas", 3);
      await drawn("the complex plane", ".panes figure:nth-child(2) canvas", 60);
      const poles = await text(driver, "[aria-label=Poles]");
      // The example's state: 2874.20 MeV, 0.62 MeV, constant width: sqrt(s_R) differs by less than a keV.
      expect(poles.replace(/\s/g, "")).toMatch(/2874\.2/);
      expect(poles).toMatch(/One pole/);
      expect(await text(driver, "[aria-label='In other words']")).toMatch(/massless channels/);
      await noProblem();
    },
    PATIENCE_MS,
  );

  it(
    "draws diagrams with their shares, the plane of energy and angle, and the unitarity report",
    async () => {
      await choose("Hypothesis", "diagrams");
      await choose("f is beam 1", "pair_elastic");
      await type(driver, await field(driver, "model.diagrams.mediators[0].width"), "0.62 MeV");
      // Radiation on with exchange diagrams asks for a cut, in a sentence.
      await until(driver, "no refusal", "return [...document.querySelectorAll('.problem, .stripe li, .stripe')].some((one) => /s-channel one/.test(one.innerText))");
      await type(driver, await field(driver, "model.cos_cut"), "0.9");
      await until(driver, "no diagrams", "return document.querySelectorAll('.diagram').length === 2");
      const shares = await text(driver, "[aria-label=Diagrams]");
      expect(shares).toMatch(/s channel/);
      expect(shares).toMatch(/t channel/);
      expect(shares).toMatch(/interference/);
      expect(shares).toMatch(/%/);
      await drawn("the plane of energy and angle", "[data-pane=angles] canvas", 60);
      await driver.wait(async () => /J = 4/.test(await text(driver, "[aria-label=Unitarity]")), PATIENCE_MS, "no unitarity report");
      await noProblem();
    },
    PATIENCE_MS,
  );

  it(
    "says where tree level breaks unitarity when the coupling is strong",
    async () => {
      await type(driver, await field(driver, "model.diagrams.mediators[0].g"), "9");
      await driver.wait(async () => /breaks unitarity/.test(await text(driver, "[aria-label=Unitarity]")), PATIENCE_MS, "no breach told");
    },
    PATIENCE_MS,
  );

  it(
    "redraws every picture while a coupling is dragged",
    async () => {
      await type(driver, await field(driver, "model.diagrams.mediators[0].g"), "0.1");
      const slider = await driver.findElement(By.css("input[aria-label='Coupling g of φ']"));
      await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' })", slider);
      // A step of the slider, and how long until picture and share have followed.
      const times = await driver.executeAsyncScript<number[]>(
        `const [slider, done] = arguments;
         const amount = () => document.querySelector('.diagrams .amount')?.innerText ?? '';
         const times = [];
         let step = 0;
         const next = () => {
           if (step === 40) return done(times);
           step += 1;
           const before = amount();
           const start = performance.now();
           slider.value = String(0.1 + 0.002 * step);
           slider.dispatchEvent(new Event('input', { bubbles: true }));
           const look = () => {
             if (amount() !== before) { times.push(performance.now() - start); setTimeout(next, 20); }
             else if (performance.now() - start > 2000) { times.push(2000); next(); }
             else requestAnimationFrame(look);
           };
           requestAnimationFrame(look);
         };
         next();`,
        slider,
      );
      expect(times.length).toBe(40);
      const sorted = [...times].sort((a, b) => a - b);
      const p95 = sorted[37] ?? 2000;
      console.log(`drag of a coupling: median ${sorted[20]?.toFixed(1)} ms, 95th percentile ${p95.toFixed(1)} ms (${engine})`);
      // The aim is 33 ms, on a machine of its own: the figure is printed. What is tested is that every step is
      // followed, on a machine that may be busy with much else.
      expect(p95).toBeLessThan(1500);
    },
    PATIENCE_MS,
  );

  it(
    "takes a K-matrix and several waves, and refuses a forbidden J^PC with the reason",
    async () => {
      await choose("Hypothesis", "k_matrix");
      await until(driver, "no K-matrix fields", "return document.querySelector('[data-path=\"model.k_matrix.poles[0].g1\"]') !== null");
      await driver.wait(async () => /T/.test(await text(driver, "[data-lane=amplitude-modulus]")), PATIENCE_MS, "no |T|²");
      await choose("Hypothesis", "waves");
      await choose("P and C of a fermion pair", "-+");
      await until(driver, "no reason", "return [...document.querySelectorAll('.problem')].some((one) => /cannot form 1/.test(one.innerText))");
      await choose("P and C of a fermion pair", "--");
      await until(driver, "still refused", "return ![...document.querySelectorAll('.problem')].some((one) => /cannot form 1/.test(one.innerText))");
      await drawn("the plane of energy and angle", "[data-pane=angles] canvas", 20);
      await choose("Hypothesis", "partial_wave");
      await noProblem();
    },
    PATIENCE_MS,
  );

  it(
    "lets a propagator be chosen, and its width follow from couplings",
    async () => {
      await choose("Form", "flatte");
      await until(driver, "no couplings", "return document.querySelector('[data-path=\"model.resonances[0].flatte[0].g_squared\"]') !== null");
      expect(await driver.findElements(By.css('[data-path="model.resonances[0].width"]'))).toHaveLength(0);
      await until(driver, "no sheets to choose", "return document.querySelectorAll('.sheet-signs button').length >= 2");
      await choose("Form", "constant_width");
      await press(driver, "Scan");
      await settled(driver);
    },
    PATIENCE_MS,
  );
});
