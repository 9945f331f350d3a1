/** Lines of the table of maps, out of the pieces in which the glue hands them over. */

/** @param {PackedRow | UnfittedMap} given @returns {MapRow | UnfittedMap} */
export function unpackedRow(given) {
  if (!Array.isArray(given)) return given;
  const [numbers, text] = given;
  const [rv, adjusted_rv, degrees_of_freedom, depth_mm, eccentricity, strength, radial, edge, power, variance, turned] = numbers;
  const [name, site, side, region, ...cells] = text.split("\0");
  /** @param {number} at */
  const vector = (at) => numbers.slice(at, at + 3);
  /** @param {number} number */
  const known = (number) => (Number.isNaN(number) ? null : number);
  return {
    name,
    rv,
    adjusted_rv,
    degrees_of_freedom,
    canonical_mm: vector(11),
    canonical_direction: vector(14),
    position_mm: vector(17),
    depth_mm,
    eccentricity,
    strength,
    radial_share: known(radial),
    at_boundary: edge === 1,
    nearest_site: site === "" ? null : site,
    side,
    region,
    power,
    variance: known(variance),
    flipped: turned === 1,
    cells,
  };
}
