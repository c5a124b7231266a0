import { defineConfig } from "vitest/config";

// A tool (screenshots, timing) uses the same browsers but is no test: xtask names it.
const tool = process.env["WIDTHWISE_TOOL"];

export default defineConfig({
  test: {
    include: tool ? [`tools/${tool}.ts`] : ["**/*.test.ts"],
    // Browsers of one engine after the other: their drivers do not like company on two cores.
    fileParallelism: false,
    testTimeout: tool ? 1_800_000 : 60_000,
    hookTimeout: 120_000,
  },
});
