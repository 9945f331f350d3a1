// Which files belong together, what decompositions are called, and what they share.
import assert from "node:assert/strict";
import { test } from "node:test";
import { emptyDecomposition, entitiesOf, groupedInputs, mirrored, namesOf, newDecompositions, settingsBeside, uniqueName } from "../../www/session/decompositions.js";
import { NO_INPUTS } from "../../www/session/inputs.js";

const file = (name, role) => ({ name, content: name, role });
const table = (name) => file(name, "maps");
const told = (groups) => groups.map(({ maps, electrodes, others }) => [maps.name, electrodes?.name ?? null, ...others.map(({ name }) => name)]);

test("subject and session are told by entities, not by what looks like one", () => {
  assert.deepEqual(entitiesOf("sub-01_ses-b_task-rest_maps.tsv"), { subject: "01", session: "b" });
  assert.deepEqual(entitiesOf("study/sub-7/ica.npy"), { subject: "7", session: "" });
  assert.deepEqual(entitiesOf("mysub-01_x.tsv"), { subject: "", session: "" });
  assert.deepEqual(entitiesOf("subject 1.tsv"), { subject: "", session: "" });
});

test("names leave out subject, ending and what all have in common", () => {
  assert.deepEqual(namesOf(["maps.v2.tsv"]), ["maps.v2"]);
  assert.deepEqual(namesOf(["sub-01.tsv"]), ["sub-01"]);
  assert.deepEqual(namesOf(["sub-01_rest_infomax_maps.tsv", "sub-01_rest_jade_maps.tsv"]), ["infomax", "jade"]);
  assert.deepEqual(namesOf(["sub-01_infomax.tsv", "sub-02_infomax.tsv"]), ["infomax", "infomax"]);
  // Nothing would be left of one.
  assert.deepEqual(namesOf(["a_b.tsv", "a_c_b.tsv"]), ["a_b", "a_c_b"]);
  assert.deepEqual(namesOf(["before lunch.tsv", "after lunch.tsv"]), ["before", "after"]);
});

test("a name is unique among those of one subject", () => {
  const others = [{ name: "a", subject: "1" }, { name: "a (2)", subject: "1" }, { name: "a", subject: "2" }];
  assert.equal(uniqueName("a", "1", others), "a (3)");
  assert.equal(uniqueName("a", "3", others), "a");
  const made = newDecompositions([{ ...NO_INPUTS, maps: table("x.tsv") }, { ...NO_INPUTS, maps: table("x.tsv") }], emptyDecomposition(1), []);
  assert.deepEqual(made.map(({ name }) => name), ["x", "x (2)"]);
  assert.equal(new Set(made.map(({ id }) => id)).size, 2);
});

test("tables take the files of their subject and session, and what belongs to none", () => {
  const given = [
    table("sub-01_ses-1_maps.tsv"), table("sub-01_ses-2_maps.tsv"), table("sub-02_maps.tsv"),
    file("sub-01_electrodes.tsv", "electrodes"), file("sub-01_ses-2_electrodes.tsv", "electrodes"), file("coordsystem.json", "coordinates"),
    file("sub-01_ses-1_channels.tsv", "channels"),
  ];
  assert.deepEqual(told(groupedInputs(given, NO_INPUTS)), [
    ["sub-01_ses-1_maps.tsv", "sub-01_electrodes.tsv", "coordsystem.json", "sub-01_ses-1_channels.tsv"],
    ["sub-01_ses-2_maps.tsv", "sub-01_ses-2_electrodes.tsv", "coordsystem.json"],
    // Electrodes of another subject are not taken for one's own.
    ["sub-02_maps.tsv", null, "coordsystem.json"],
  ]);
});

test("one table of electrodes is shared, also one that is there; two of one worth are left to be asked about", () => {
  const maps = [table("a.tsv"), table("b.tsv")];
  assert.deepEqual(told(groupedInputs([...maps, file("e.tsv", "electrodes")], NO_INPUTS)), [["a.tsv", "e.tsv"], ["b.tsv", "e.tsv"]]);
  const held = { ...NO_INPUTS, maps: table("z.tsv"), electrodes: file("e.tsv", "electrodes"), others: [file("c.json", "coordinates"), file("t.tsv", "times")] };
  assert.deepEqual(told(groupedInputs(maps, held)), [["a.tsv", "e.tsv", "c.json"], ["b.tsv", "e.tsv", "c.json"]]);
  const [first] = groupedInputs([...maps, file("x.tsv", "electrodes"), file("y.tsv", "electrodes")], NO_INPUTS);
  assert.deepEqual([first.electrodes.name, first.others.map(({ name }) => name)], ["x.tsv", ["y.tsv"]]);
  assert.deepEqual(told(groupedInputs([table("p1.tsv"), table("q1.tsv"), file("p2.tsv", "electrodes"), file("q2.tsv", "electrodes")], NO_INPUTS)), [["p1.tsv", "p2.tsv"], ["q1.tsv", "q2.tsv"]]);
});

test("files of one decomposition stay together", () => {
  assert.deepEqual(groupedInputs([table("a.tsv"), file("e.tsv", "electrodes")], NO_INPUTS), []);
  // A matrix that may be the sphering matrix of the other: the engine asks.
  assert.deepEqual(groupedInputs([table("weights.npy"), table("sphere.npy")], NO_INPUTS), []);
});

test("head and what is left out go for all, what belongs to one table stays", () => {
  const electrodes = file("e.tsv", "electrodes");
  const [a, b, c] = [1, 2, 3].map((id) => ({ ...emptyDecomposition(id), inputs: { ...NO_INPUTS, maps: table(`${id}.tsv`), electrodes: id < 3 ? electrodes : null } }));
  b.settings = { ...b.settings, flip: [4], orientation: "channels-in-rows" };
  const settings = { ...a.settings, exclude: ["Cz"], flip: [1], mirror: true, head: { radius_mm: 90 }, files: { "e.tsv": { decimal: "comma" }, "1.tsv": { label: 2 } } };
  const state = { decompositions: [a, b, c], current: 1, inputs: a.inputs, settings, example: null, answer: null, failure: null };
  const [, second, third] = mirrored(state);
  assert.deepEqual([second.settings.exclude, second.settings.flip, second.settings.orientation], [["Cz"], [4], "channels-in-rows"]);
  // The same electrodes, the same that is said of them.
  assert.deepEqual([second.settings.mirror, second.settings.head, second.settings.files], [true, { radius_mm: 90 }, { "e.tsv": { decimal: "comma" } }]);
  assert.deepEqual([third.settings.exclude, third.settings.head, third.settings.mirror, third.settings.files], [["Cz"], { radius_mm: 90 }, undefined, undefined]);
  const fresh = settingsBeside({ ...NO_INPUTS, maps: table("9.tsv"), electrodes }, { inputs: a.inputs, settings });
  assert.deepEqual([fresh.exclude, fresh.flip, fresh.mirror], [["Cz"], [], true]);

  // Other electrodes under the same maps are others for all who had these.
  const other = file("f.tsv", "electrodes");
  const moved = mirrored({ ...state, inputs: { ...a.inputs, electrodes: other } });
  assert.deepEqual(moved.map(({ inputs }) => inputs.electrodes?.name ?? null), ["f.tsv", "f.tsv", null]);
});
