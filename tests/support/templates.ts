// vitest's global set-up: runs once, before the first test file.
export { makeTemplates as setup } from "./database.ts";
