// What a person does: looks, clicks, types, drags. Nothing here reaches into the page's state.
import { By, Key, type WebDriver, type WebElement } from "selenium-webdriver";

/** Opens a room beside the axis. */
export async function enter(driver: WebDriver, room: string): Promise<void> {
  const door = await driver.findElement(By.xpath(`//nav[@aria-label='Rooms']//button[normalize-space()='${room}']`));
  await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' })", door);
  await door.click();
}

/** The field of the sheet with this path, as soon as it is there: a room that has just been opened may still be coming. */
export async function field(driver: WebDriver, path: string): Promise<WebElement> {
  const found = await driver.wait(async () => (await driver.findElements(By.css(`[data-path="${path}"]`)))[0] ?? null, 10_000, `no field ${path}`);
  return found as unknown as WebElement;
}

/** Replaces a field's text by typing. */
export async function type(driver: WebDriver, element: WebElement, text: string): Promise<void> {
  await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' }); arguments[0].focus(); arguments[0].select();", element);
  await element.sendKeys(text === "" ? Key.BACK_SPACE : text);
}

/** A button by its words (or accessible name). */
export function button(driver: WebDriver, words: string): Promise<WebElement> {
  return driver.findElement(By.xpath(`//button[contains(normalize-space(.), "${words}") or @aria-label="${words}"]`)) as unknown as Promise<WebElement>;
}

/** Presses a button, scrolled into view. */
export async function press(driver: WebDriver, words: string): Promise<void> {
  const found = await button(driver, words);
  await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' })", found);
  await found.click();
}

/** Text of the first element that fits a selector, "" if there is none. */
export async function text(driver: WebDriver, selector: string): Promise<string> {
  return driver.executeScript<string>("return document.querySelector(arguments[0])?.innerText ?? ''", selector);
}

/** Waits until a condition in the page holds. */
export async function until(driver: WebDriver, what: string, body: string, ...values: unknown[]): Promise<void> {
  await driver.wait(() => driver.executeScript<boolean>(body, ...values), 30_000, what);
}

/** Waits until the curve and the points of the open sheet are drawn. */
export async function settled(driver: WebDriver): Promise<void> {
  await until(
    driver,
    "the lanes were not drawn",
    "return document.querySelectorAll('.lanes-box canvas').length === 3 && document.querySelector('.read-out dd') !== null && !document.querySelector('.read-out .quiet')",
  );
}

/** A number that changes whenever the pixels of the line-shape lane change. */
export function pixels(driver: WebDriver): Promise<number> {
  return driver.executeScript<number>(`
    const canvas = document.querySelector('[data-lane="line-shape"] canvas');
    const { data } = canvas.getContext('2d').getImageData(0, 0, canvas.width, canvas.height);
    let sum = 0;
    for (let i = 0; i < data.length; i += 4) sum = (sum * 31 + data[i] + data[i + 1] * 3 + data[i + 3] * 7) % 2147483647;
    return sum;`);
}
