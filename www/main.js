/** Puts the page together: one session, its views, and the engine. */

import { startClient } from "./engine/pool/start.js";
import { takeDropsAndPastes } from "./intake/drop.js";
import { makeSession } from "./session/session.js";
import { writeWords } from "./text/words.js";
import { showAnswer } from "./views/answer.js";
import { showChoice } from "./views/choice.js";
import { showColophon } from "./views/colophon.js";
import { need } from "./views/element.js";
import { showFailure } from "./views/failure.js";
import { showIntake } from "./views/intake.js";
import { showMaps } from "./views/maps.js";
import { showNotes } from "./views/notes.js";
import { showNumbers } from "./views/numbers.js";
import { showStatus } from "./views/status.js";

const session = makeSession();

addEventListener("error", (event) => session.fail(event.error ?? event.message));
addEventListener("unhandledrejection", (event) => session.fail(event.reason));

writeWords(document);
for (const show of [
  showStatus,
  showIntake,
  showFailure,
  showAnswer,
  showChoice,
  showMaps,
  showNumbers,
  showNotes,
  showColophon,
]) {
  show(session);
}
takeDropsAndPastes(session, need("drop", HTMLElement));

startClient()
  .then(async (client) => session.engineReady(client, await client.ask({ kind: "program" })))
  .catch((error) => session.fail(error));
