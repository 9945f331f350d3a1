/** Reference populations, in the order in which they are told. @type {PopulationKind[]} */
export const POPULATION_KINDS = ["noise", "one-dipole", "two-dipoles", "five-dipoles", "twenty-dipoles", "hundred-dipoles"];

/** Maps of a table whose report has the region of each, which takes 10 ms, and of which electrodes to check are told. */
export const MOST_REGIONS = 1000;
