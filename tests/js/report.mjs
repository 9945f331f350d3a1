// Reads a list of requests as JSON, prints the list of reports.
import { readFileSync } from "node:fs";
import { pathToFileURL } from "node:url";

const { openEngine } = await import(pathToFileURL(`${process.env.INWARD_DIST}/engine/inward.mjs`).href);
const engine = await openEngine();
const requests = JSON.parse(readFileSync(0, "utf8"));
process.stdout.write(JSON.stringify(requests.map((request) => engine.analyse(request))));
