// The engine in the built file: it starts, answers, survives every forced failure, and nothing
// leaves the page. From the file system and over http.
import type { WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { Served, fromFile, inPage, load, outgoing } from "./support/page";

describe.each(engines.flatMap((engine) => [[engine, "file"] as const, [engine, "http"] as const]))("%s over %s", (engine, road) => {
  let driver: WebDriver;
  let served: Served;
  let url: string;

  beforeAll(async () => {
    served = await Served.start();
    url = road === "file" ? fromFile : served.url;
    driver = await open(engine);
    await load(driver, url);
  });
  afterAll(async () => {
    await driver?.quit();
    await served?.stop();
  });

  it("answers a request in a worker", async () => {
    const body = await inPage<{ kind: string }>(driver, "return (await pool.run({ kind: 'tables' })).body");
    expect(body.kind).toBe("tables");
  });

  it("refuses what is no request, naming what is wrong", async () => {
    await expect(inPage(driver, "return pool.run({ kind: 'nonsense' })")).rejects.toThrow(/Refused: .*nonsense/);
  });

  it.each(["trap", "panic", "memory"])("survives a forced %s", async (what) => {
    const failure = await inPage<string>(driver, "return pool.force(values[0]).catch((error) => error.name + ': ' + error.message)", what);
    expect(failure).toMatch(/^Trapped: /);
    if (what === "panic") expect(failure).toContain("forced panic");
    const after = await inPage<number>(driver, "return (await Promise.all([1, 2, 3, 4, 5, 6].map(() => pool.run({ kind: 'tables' })))).length");
    expect(after).toBe(6);
  });

  it("ends a worker that hangs when told to, and goes on", async () => {
    const outcome = await inPage<string>(
      driver,
      `const stop = new AbortController();
       const hung = pool.force('hang', { signal: stop.signal }).catch((error) => error.name);
       setTimeout(() => stop.abort(), 200);
       const ended = await hung;
       await pool.run({ kind: 'tables' });
       return ended;`,
    );
    expect(outcome).toBe("Cancelled");
  });

  it.each(["throws", "fails while it loads"])("says so when a worker is refused to start (it %s)", async (how) => {
    const outcome = await inPage<string[]>(
      driver,
      `const broken = URL.createObjectURL(new Blob(["throw new Error('refused')"], { type: "text/javascript" }));
       const refuse = values[0] === "throws" ? () => { throw new Error("refused"); } : () => new Worker(broken);
       const told = (work) => work.then(() => "answered", (error) => error.name);
       const never = new pool.constructor(pool.module, refuse, 2);
       const first = await told(never.run({ kind: "tables" }));
       never.close();
       // Refused twice, then let in: the request is still there.
       let tries = 0;
       const later = new pool.constructor(pool.module, () => (++tries < 3 ? refuse() : pool.spawn()), 1);
       const second = await told(later.run({ kind: "tables" }));
       later.close();
       return [first, second, await told(pool.run({ kind: "tables" }))];`,
      how,
    );
    expect(outcome).toEqual(["BootFailed", "answered", "answered"]);
  });

  it("asks the network for nothing", async () => {
    expect(await outgoing(driver, url)).toEqual([]);
    expect(served.requests.filter((path) => path !== "/")).toEqual([]);
  });
});
