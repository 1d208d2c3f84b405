// `npm run bench`: the numerical core, then the store, in one run on one machine; what counts are the ratios.
import { runChemBench } from "./chem/bench.ts";
import { runDbBench } from "./db/bench.ts";

const print = (line: string) => {
  process.stdout.write(`${line}\n`);
};

runChemBench(print);
const core = process.memoryUsage().rss;
await runDbBench(print);
print(`resident memory, numerical core alone: ${Math.round(core / 2 ** 20)} MiB`);
print(`resident memory, with the store and twenty writers: ${Math.round(process.memoryUsage().rss / 2 ** 20)} MiB`);
