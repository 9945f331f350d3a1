/** Reference populations, in the order in which they are told. @type {PopulationKind[]} */
export const POPULATION_KINDS = ["noise", "one-dipole", "two-dipoles", "five-dipoles", "twenty-dipoles", "hundred-dipoles"];

/** Maps of a table whose report has the region of each: they take 10 ms each. */
export const MOST_REGIONS = 1000;
