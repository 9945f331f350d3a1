/**
 * The banner of an embedded page: who receives what is handed over, what is offered and asked for, and Stop. It stays
 * as long as the page is connected, and nothing passes in or out without a click.
 */

import { askedByAddress } from "../host/address.js";
import { isEmbedded, openChannel, originNamed } from "../host/channel.js";
import { MOST_FILES, readMessage } from "../host/protocol.js";
import { inputOfFile, MOST_BYTES } from "../intake/files.js";
import { handOverText, hostFault, hostText, offerText, refusalText, takeText, wantedText } from "../text/host.js";
import { word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */
/** @import { Wish } from "../host/protocol.js" */

/** @param {Session} session */
export function showHost(session) {
  let origin = "";
  /** @type {ReturnType<typeof openChannel> | null} */
  let channel = null;
  /** What waits for a click, by kind. @type {Map<string, Wish>} */
  const waiting = new Map();

  const banner = make("section", "", { class: "hosted", "aria-label": word("host"), hidden: "", id: "hosted" });
  const said = make("p", "", { role: "status" });
  const line = make("p", "", { class: "hosted-who" });
  const stop = button(word("host.stop"), () => {
    channel?.send({ kind: "stopped" });
    channel?.close();
    channel = null;
    waiting.clear();
    show();
    need("main", HTMLElement).focus({ preventScroll: true });
  });
  const who = make("span", "");
  line.append(who, " ", stop);
  const wishes = make("div", "", { "aria-live": "polite" });
  banner.append(line, wishes, said);
  document.querySelector(".masthead")?.before(banner);

  /** @param {string} text @param {() => void} act */
  function button(text, act) {
    const element = make("button", text, { type: "button" });
    element.addEventListener("click", act);
    return element;
  }

  /** @param {Wish} wish whose turn is over @param {string} text */
  function done(wish, text) {
    waiting.delete(wish.kind);
    said.textContent = text;
    show();
    stop.focus({ preventScroll: true });
  }

  /** @param {Wish} wish */
  async function grant(wish) {
    const to = channel;
    if (wish.kind === "data") {
      done(wish, word("host.taken"));
      to?.send({ kind: "taken", id: wish.id });
      await session.add(wish.files.map(inputOfFile));
      if (session.read().failure === null && Object.keys(wish.settings).length > 0) session.set(wish.settings);
      return;
    }
    const report = await session.report();
    // Whoever has stopped meanwhile, or said no, hands nothing over.
    if (channel !== to || waiting.get(wish.kind) !== wish) return;
    to?.send(report === null ? { ...refusalText({ code: "report-failed" }), id: wish.id } : { kind: "report", id: wish.id, name: "inward-report.json", content: await report.text() });
    done(wish, report === null ? "" : word("host.handed"));
  }

  /** @param {Wish} wish */
  function wishElement(wish) {
    const element = make("p", "", { class: "wish" });
    const { answer, namesShown } = session.read();
    const text = wish.kind === "data" ? offerText(origin, wish.files) : wantedText(origin, answer !== null, namesShown);
    const yes = button(wish.kind === "data" ? takeText(origin) : handOverText(origin), () => grant(wish).catch(session.fail));
    const no = button(word("host.decline"), () => {
      channel?.send({ ...refusalText({ code: "declined" }), id: wish.id });
      done(wish, "");
    });
    no.className = "quiet";
    element.append(text, " ");
    if (wish.kind === "data" || answer !== null) element.append(yes, " ");
    element.append(no);
    return element;
  }

  function show() {
    banner.hidden = origin === "";
    who.textContent = hostText(origin, channel === null);
    stop.hidden = channel === null;
    const focused = wishes.contains(document.activeElement);
    wishes.replaceChildren(...[...waiting.values()].map(wishElement));
    if (focused) stop.focus({ preventScroll: true });
  }

  /** @param {unknown} message */
  function hear(message) {
    const wish = readMessage(message);
    if (wish.kind === "refused") return channel?.send({ ...refusalText(wish), id: wish.id });
    const former = waiting.get(wish.kind);
    if (former !== undefined) channel?.send({ ...refusalText({ code: "superseded" }), id: former.id });
    waiting.set(wish.kind, wish);
    said.textContent = "";
    channel?.send({ kind: "received", id: wish.id });
    show();
  }

  function connect() {
    const given = askedByAddress().get("host");
    const named = given === null ? null : originNamed(given);
    if (given !== null && named === null) session.fail(hostFault(given));
    // Another place in the page leaves the connection as it is; what was stopped stays stopped.
    if (named === null || named === origin || !isEmbedded()) return;
    channel?.close();
    waiting.clear();
    origin = named;
    channel = openChannel(origin, hear);
    ready();
    show();
  }

  function ready() {
    const { program } = session.read();
    if (program !== null) channel?.send({ kind: "ready", program, accepts: ["data", "report-wanted"], most_bytes: MOST_BYTES, most_files: MOST_FILES });
  }

  addEventListener("hashchange", connect);
  connect();
  session.watch((state) => state.program, ready);
  session.watch(({ answer, namesShown }) => `${answer === null} ${namesShown}`, () => origin !== "" && show());
}
