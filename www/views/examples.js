/** The invented maps, one click away before and after an answer; own data they replace can be taken back. */

import { carriedExamples } from "../intake/examples.js";
import { setAsideText, word } from "../text/words.js";
import { make, need } from "./element.js";

/** @import { Session } from "../session/session.js" */

/** @param {Session} session @param {Example} example */
function exampleElement(session, example) {
  const button = make("button", "", { type: "button", class: "example", "data-example": example.name });
  const title = make("strong", example.title);
  title.append(make("span", ` · ${word("examples.now")}`, { class: "now" }));
  button.append(title, make("span", example.line));
  button.addEventListener("click", () => {
    session.show(example);
    need("main", HTMLElement).focus({ preventScroll: true });
  });
  const item = make("li", "");
  item.append(button);
  return item;
}

/** @param {Session} session */
export function showExamples(session) {
  const examples = carriedExamples();
  const lists = ["empty-examples", "intake-examples"].map((id) => need(id, HTMLUListElement));
  for (const list of lists) list.append(...examples.map((example) => exampleElement(session, example)));

  session.watch(
    (state) => state.answer === null,
    (empty) => {
      // The empty page has them in its middle.
      need("more-examples", HTMLElement).hidden = empty;
    },
  );
  need("take-back", HTMLButtonElement).addEventListener("click", () => {
    session.takeBack();
    need("main", HTMLElement).focus({ preventScroll: true });
  });
  session.watch(
    (state) => state.setAside,
    (setAside) => {
      need("set-aside", HTMLElement).hidden = setAside === null;
      need("set-aside-words", HTMLElement).textContent = setAside === null ? "" : setAsideText(setAside.inputs);
    },
  );
  session.watch(
    (state) => state.example?.name,
    (name) => {
      for (const button of lists.flatMap((list) => [...list.querySelectorAll(".example")])) {
        if (button.getAttribute("data-example") === name) button.setAttribute("aria-current", "true");
        else button.removeAttribute("aria-current");
      }
    },
  );
}
