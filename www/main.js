/** Puts the page together: one session, its views, and the engine. */

import { startPool } from "./engine/pool/start.js";
import { carriedExamples } from "./intake/examples.js";
import { takeDropsAndPastes } from "./intake/drop.js";
import { makeSession } from "./session/session.js";
import { writeWords } from "./text/words.js";
import { showAddress } from "./views/address.js";
import { showAllDipoles } from "./views/all_dipoles.js";
import { showAlternatives } from "./views/alternatives.js";
import { showAnswer } from "./views/answer.js";
import { showColophon } from "./views/colophon.js";
import { copyCellsPlainly } from "./views/copying.js";
import { showDecompositions } from "./views/decompositions.js";
import { showElectrodes } from "./views/electrodes.js";
import { furnish, need } from "./views/element.js";
import { showExamples } from "./views/examples.js";
import { showFailure } from "./views/failure.js";
import { showGroups } from "./views/groups.js";
import { showHead } from "./views/head.js";
import { showHeadViews } from "./views/head_views.js";
import { showHost } from "./views/host.js";
import { showInfluence } from "./views/influence.js";
import { showIntake } from "./views/intake.js";
import { showLandscape } from "./views/landscape.js";
import { showLeaving } from "./views/leaving.js";
import { showMatching } from "./views/matching.js";
import { showMaps } from "./views/maps.js";
import { showNotes } from "./views/notes.js";
import { showNumbers } from "./views/numbers.js";
import { showOverview } from "./views/overview.js";
import { showResponse } from "./views/response.js";
import { showSaving } from "./views/saving.js";
import { showSealed } from "./views/sealed.js";
import { showShares } from "./views/shares.js";
import { showSign } from "./views/sign.js";
import { showStatus } from "./views/status.js";
import { showTable } from "./views/table.js";
import { showPopulations } from "./views/populations.js";
import { showTerms } from "./views/terms.js";
import { showTrust } from "./views/trust.js";
import { showTrustSettings } from "./views/trust_settings.js";
import { showUnderstood } from "./views/understood.js";
import { showUndo } from "./views/undo.js";
import { showWhatIf } from "./views/what_if.js";

need("unstarted", HTMLElement).remove();
/** @import { Pool } from "./engine/pool/pool.js" */

const session = makeSession();

const answerStyle = new CSSStyleSheet();
answerStyle.replaceSync(ANSWER_STYLE);
document.adoptedStyleSheets = [answerStyle];

addEventListener("error", (event) => {
  // A note of the browser that a size settles in the next frame; nothing has failed.
  if (event.message?.startsWith("ResizeObserver loop")) return;
  session.fail(event.error ?? event.message);
});
addEventListener("unhandledrejection", (event) => session.fail(event.reason));

furnish(need("answer", HTMLElement), ANSWER_MARKUP);
writeWords(document);
for (const show of [
  showStatus,
  showIntake,
  showExamples,
  showFailure,
  showSaving,
  showAnswer,
  showDecompositions,
  showOverview,
  showTable,
  showMaps,
  showSign,
  showTrust,
  showHeadViews,
  showLandscape,
  showAlternatives,
  showInfluence,
  showWhatIf,
  showPopulations,
  showTrustSettings,
  showNumbers,
  showElectrodes,
  showHead,
  showResponse,
  showShares,
  showAllDipoles,
  showGroups,
  showMatching,
  showUnderstood,
  showNotes,
  showLeaving,
  showUndo,
  showColophon,
  showSealed,
  showTerms,
]) {
  show(session);
}
takeDropsAndPastes(session, need("drop", HTMLElement));
showHost(session);
showAddress(session);
copyCellsPlainly();

/** When nothing else is to be done, the workers get warm on an invented map. @param {Pool} pool */
function warmUpLater(pool) {
  const [example] = carriedExamples().sort((a, b) => b.maps.content.length - a.maps.content.length);
  if (example === undefined) return;
  const files = [example.maps, example.electrodes].flatMap((file) => file ?? []);
  const idle = globalThis.requestIdleCallback ?? ((/** @type {() => void} */ job) => setTimeout(job, 200));
  idle(() => pool.warmUp({ files }));
}

startPool()
  .then(async (client) => {
    session.engineReady(
      client,
      await client.ask({ kind: "program" }),
      await client.ask({ kind: "heads" }),
      await client.ask({ kind: "choices" }),
      {
        relative: await client.ask({ kind: "columns", unit: "relative" }),
        uV: await client.ask({ kind: "columns", unit: "uV" }),
        V: await client.ask({ kind: "columns", unit: "V" }),
      },
    );
    warmUpLater(client);
  })
  .catch((error) => session.fail(error));
