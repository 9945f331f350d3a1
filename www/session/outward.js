/**
 * Names as they leave the page. Those of files may be people's, and so may be what is made of them: names of
 * decompositions and subjects. Unless the user shows them, files are called after what they are, and the others
 * counted. What the user has typed stays, and so does what an invented example is called.
 */

import { namedFiles } from "./inputs.js";

/** @param {string} name */
function endingOf(name) {
  return /\.[A-Za-z0-9]{1,5}$/.exec(name)?.[0].toLowerCase() ?? "";
}

/** Names that are counted, the first of each kind without a number. */
function counter() {
  /** @type {Map<string, number>} */
  const counts = new Map();
  /** @param {string} kind @param {string} ending */
  return (kind, ending) => {
    const count = (counts.get(kind) ?? 0) + 1;
    counts.set(kind, count);
    return `${kind}${count === 1 ? "" : ` ${count}`}${ending}`;
  };
}

/** Files by the names that the engine knows them by. @param {SessionState["decompositions"]} decompositions @returns {Map<number, Record<string, string>>} */
function hiddenFiles(decompositions) {
  const next = counter();
  /** One file may belong to several. @type {Map<Input, string>} */
  const known = new Map();
  return new Map(
    decompositions.map(({ id, inputs, example }) => {
      const named = namedFiles(inputs).map(({ name, input, kind }) => {
        // What was pasted has no name of its own.
        if (example !== null || input.name === "") return [name, name];
        const hidden = known.get(input) ?? next(kind ?? input.role ?? "file", endingOf(input.name));
        known.set(input, hidden);
        return [name, hidden];
      });
      return [id, Object.fromEntries(named)];
    }),
  );
}

/** Files within archives have names of their own. @param {Record<string, string>} files @param {Answer | null} answer */
function withInner(files, answer) {
  if (answer === null) return files;
  const { understood } = answer.preamble;
  const names = new Set([...understood.files.map(({ name }) => name), ...understood.choices.flatMap(({ file }) => file ?? [])]);
  const next = counter();
  const inner = [...names].flatMap((name) => {
    const outer = Object.keys(files).find((file) => files[file] !== file && name.startsWith(`${file}/`));
    return outer === undefined ? [] : [[name, `${files[outer]}/${next("file", endingOf(name))}`]];
  });
  return { ...files, ...Object.fromEntries(inner) };
}

/** @param {Pick<SessionState, "decompositions" | "namesShown">} state */
export function outwardNames({ decompositions, namesShown }) {
  const files = namesShown ? new Map() : hiddenFiles(decompositions);
  /** Those of one name, or one subject, are still told to be the same. @param {string} word @param {string[]} all */
  const counted = (word, all) => {
    const distinct = [...new Set(all)];
    return (/** @type {string} */ one) => `${word} ${distinct.indexOf(one) + 1}`;
  };
  const hiddenName = counted("decomposition", decompositions.map(({ name }) => name));
  const hiddenSubject = counted("subject", decompositions.flatMap(({ subject }) => subject || []));
  const labels = decompositions.map(({ id, name, subject, typed, example }) => {
    const open = namesShown || example !== null;
    const label = { name: open || typed ? name : hiddenName(name), subject: open || subject === "" ? subject : hiddenSubject(subject) };
    return /** @type {const} */ ([id, label]);
  });
  return {
    /** For tables that are saved as they are. */
    files: /** @type {Map<number, Record<string, string>>} */ (files),
    /** For what is told of them. */
    told: new Map(decompositions.map(({ id, answer }) => [id, withInner(files.get(id) ?? {}, answer)])),
    decompositions: new Map(labels),
  };
}
