// Reads a list of { request, done, index } as JSON, prints the methods and the record of each.
import { readFileSync } from "node:fs";
import { pathToFileURL } from "node:url";

const { openEngine } = await import(pathToFileURL(`${process.env.INWARD_DIST}/engine/inward.mjs`).href);
const engine = await openEngine();
const told = JSON.parse(readFileSync(0, "utf8")).map(({ request, done, index }) => {
  const study = engine.open(request);
  const words = { methods: study.methods(done), record: study.record(index, done) };
  study.close();
  return words;
});
process.stdout.write(JSON.stringify(told));
