export { start } from "./app/_server/start.ts";
