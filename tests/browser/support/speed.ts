// How fast the page is, by its own clock: a slider to the redrawn curve, ten thousand points, tasks of the main thread.
import { By, type WebDriver } from "selenium-webdriver";
import { press, settled, until } from "./hand";
import { fromFile, load } from "./page";

/** The page on its example, nothing kept from before. */
export async function afresh(driver: WebDriver): Promise<void> {
  await driver.get("about:blank");
  await load(driver, `${fromFile}?fresh`);
  await driver.executeAsyncScript(
    "const done = arguments[0]; const all = indexedDB.deleteDatabase('widthwise'); all.onsuccess = all.onerror = all.onblocked = () => done(); localStorage.clear();",
  );
  await load(driver, fromFile);
  await settled(driver);
}

/** Milliseconds from each of 60 steps of a slider to the frame in which its curve has been drawn. */
export async function sliderToCurve(driver: WebDriver, slider: unknown): Promise<number[]> {
  return driver.executeAsyncScript<number[]>(
    `const [slider, done] = arguments;
     const taken = [];
     const step = (k) => {
       if (k === 60) return done(taken);
       performance.clearMarks('curve-drawn');
       const begun = performance.now();
       slider.value = String(Number(slider.min) + (Number(slider.max) - Number(slider.min)) * (0.2 + 0.01 * k));
       slider.dispatchEvent(new Event('input', { bubbles: true }));
       const wait = () => {
         const mark = performance.getEntriesByName('curve-drawn').at(-1);
         if (mark && mark.startTime > begun) {
           taken.push(mark.startTime - begun);
           requestAnimationFrame(() => step(k + 1));
         } else if (performance.now() - begun > 3000) done([...taken, 3000]);
         else setTimeout(wait, 1);
       };
       wait();
     };
     step(0);`,
    slider,
  );
}

/** The value below which this share of the times lies. */
export function quantile(times: readonly number[], share: number): number {
  const sorted = [...times].sort((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] ?? Number.NaN;
}

/** Milliseconds from "Replace all points" to ten thousand points on the canvas; and to reading their table. */
export async function tenThousand(driver: WebDriver): Promise<{ read: number; plotted: number }> {
  await press(driver, "Paste or load");
  await driver.findElement(By.id("paste-text"));
  const read = await driver.executeAsyncScript<number>(
    `const done = arguments[0];
     const lines = ['id,W (MeV),L (nb^-1),n'];
     for (let i = 0; i < 10000; i += 1) lines.push('Q' + i + ',' + (2865 + i * 0.002).toFixed(3) + ',97.2,' + (60 + (i * 7919) % 40));
     const box = document.getElementById('paste-text');
     const begun = performance.now();
     const clipboardData = new DataTransfer();
     clipboardData.setData('text/plain', lines.join('\\n'));
     box.dispatchEvent(new ClipboardEvent('paste', { clipboardData, bubbles: true, cancelable: true }));
     const wait = () => {
       if ([...document.querySelectorAll('dialog .button-main')].some((button) => !button.disabled)) done(performance.now() - begun);
       else if (performance.now() - begun > 30000) done(-1);
       else setTimeout(wait, 5);
     };
     wait();`,
  );
  const plotted = await driver.executeAsyncScript<number>(
    `const done = arguments[0];
     performance.clearMarks('curve-drawn');
     const begun = performance.now();
     [...document.querySelectorAll('dialog .button')].find((button) => /Replace/.test(button.textContent)).click();
     let there = 0;
     const wait = () => {
       if (there === 0 && /10000 points/.test(document.querySelector('.lanes-foot summary').textContent)) there = performance.now();
       const mark = performance.getEntriesByName('curve-drawn').at(-1);
       if (there > 0 && mark && mark.startTime >= there - 20) done(mark.startTime - begun);
       else if (performance.now() - begun > 30000) done(-1);
       else setTimeout(wait, 5);
     };
     wait();`,
  );
  await until(driver, "the dialog stayed", "return document.querySelector('dialog[open]') === null");
  return { read, plotted };
}

/** Watches for tasks of the main thread of more than 50 ms (Chromium alone tells of them). */
export async function watchLongTasks(driver: WebDriver): Promise<void> {
  await driver.executeScript(
    "window.longTasks = []; if (PerformanceObserver.supportedEntryTypes.includes('longtask')) new PerformanceObserver((list) => window.longTasks.push(...list.getEntries().map((entry) => entry.duration))).observe({ type: 'longtask', buffered: true });",
  );
}

/** Their lengths so far, ms. */
export async function longTasks(driver: WebDriver): Promise<number[]> {
  return driver.executeScript<number[]>("return window.longTasks.splice(0)");
}
