import {defineConfig} from "vitest/config";

export default defineConfig({
  test: {
    testTimeout: 120_000,
    projects: [
      {extends: true, test: {name: "unit", include: ["test/**/*.test.ts"], exclude: ["test/outside/**"]}},
      {extends: true, test: {name: "outside", include: ["test/outside/**/*.test.ts"], testTimeout: 300_000}},
    ],
  },
});
