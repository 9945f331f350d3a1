/** In which order files that came together are recognised. */

/** From so many on, the first answer does not wait until all are recognised. */
export const MANY = 8;

/** @param {Input | undefined} input */
const isTable = (input) => input?.role === "maps" || input?.role === "electrodes-and-maps";

/**
 * Files with what they are, in the order they came in. Of many, what is needed first is recognised first: small ones, since
 * what stands beside tables is smaller than they are, then the first table; from then on it is told which are known.
 * @param {(Input | Promise<Input>)[]} given
 * @param {(input: Input, aside?: boolean) => Promise<Input>} recognise
 * @param {(known: Input[]) => void} hear
 * @returns {Promise<PromiseSettledResult<Input>[]>}
 */
export async function recognisedInNeed(given, recognise, hear) {
  if (given.length < MANY) return Promise.allSettled(given.map(async (input) => recognise(await input)));
  const taken = await Promise.allSettled(given);
  /** @type {Map<number, Input>} */
  const known = new Map();
  const bytes = (/** @type {number} */ at) => (taken[at].status === "fulfilled" ? taken[at].value.content.length : 0);
  const small = [...taken.keys()].sort((a, b) => bytes(a) - bytes(b));
  const asked = new Set(taken.flatMap(({ status }, at) => (status === "rejected" ? [at] : [])));
  let found = false;
  /** What is asked about until a table is found: no other table comes before it. @type {Promise<Input>[]} */
  const beside = [];
  const next = () => (found ? [...taken.keys()] : small).find((at) => !asked.has(at));
  /** @param {boolean} aside */
  const lane = async (aside) => {
    for (let at = next(); at !== undefined; at = next()) {
      asked.add(at);
      const one = taken[at];
      if (one.status === "rejected") continue;
      const answer = recognise(one.value, aside);
      if (!found) beside.push(answer);
      const input = await answer;
      known.set(at, input);
      taken[at] = { status: "fulfilled", value: input };
      found ||= isTable(input);
      // The first table of all is the first to be shown.
      const first = taken.findIndex((_, k) => !known.has(k) || isTable(known.get(k)));
      if (isTable(known.get(first))) hear([...known].filter(([at, { role }]) => at === first || (role !== undefined && !isTable(known.get(at)))).map(([, held]) => held));
      if (found) await Promise.all(beside);
    }
  };
  // The worker that is asked by hand opens the first table meanwhile.
  await Promise.all([lane(true), lane(false)]);
  return taken;
}
