/** Reference populations, in the order in which they are told. @type {PopulationKind[]} */
export const POPULATION_KINDS = ["noise", "one-dipole", "two-dipoles", "five-dipoles", "twenty-dipoles", "hundred-dipoles"];
