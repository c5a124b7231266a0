import { defineConfig } from "vitest/config";

export default defineConfig({
  test: { include: ["page/**/*.test.ts", "page/**/*.test.tsx", "shared/**/*.test.ts", "worker/**/*.test.ts"] },
});
