/**
 * Tells an electrode table from a table of maps by its content. Electrode tables have columns named x, y, z, or a
 * label and three numbers that lie about on a sphere, or labels alone. Everything else is taken for maps.
 */

const LOOK_AT_LINES = 600;
const SPHERE_TOLERANCE = 0.2;
/** A label on a line of its own: short, and nothing that bytes read as text would give. */
const WORD = /^(?!.*\ufffd)[\p{L}\p{N}\p{P}\p{S} ]{1,24}$/u;

/** @param {string} line */
function cellsOf(line) {
  const mark = ["\t", ";", ","].find((one) => line.includes(one)) ?? /\s+/;
  return line
    .trim()
    .split(mark)
    .map((cell) => cell.trim().replace(/^"(.*)"$/, "$1"));
}

/** @param {string | undefined} cell */
function isNumber(cell) {
  return cell !== undefined && cell !== "" && Number.isFinite(Number(cell));
}

/** Solves a small system by elimination; null when it is singular. @param {number[][]} rows augmented */
function solveSystem(rows) {
  const n = rows.length;
  for (let i = 0; i < n; i++) {
    let best = i;
    for (let j = i + 1; j < n; j++) if (Math.abs(rows[j][i]) > Math.abs(rows[best][i])) best = j;
    [rows[i], rows[best]] = [rows[best], rows[i]];
    if (Math.abs(rows[i][i]) < 1e-9) return null;
    for (let j = 0; j < n; j++) {
      if (j === i) continue;
      const factor = rows[j][i] / rows[i][i];
      for (let k = i; k <= n; k++) rows[j][k] -= factor * rows[i][k];
    }
  }
  return rows.map((row, i) => row[n] / row[i]);
}

/** Do the points keep about the same distance from some centre among them? @param {number[][]} points */
function lieOnSphere(points) {
  const count = points.length;
  if (count < 5) return false;
  const mean = [0, 1, 2].map((axis) => points.reduce((sum, point) => sum + point[axis], 0) / count);
  const centred = points.map((point) => point.map((value, axis) => value - mean[axis]));
  const reach = Math.max(...centred.map((point) => Math.hypot(...point)));
  if (!(reach > 0)) return false;
  const unit = centred.map((point) => point.map((value) => value / reach));
  // |p|² = 2 c·p + k is linear in the centre c and in k = R² − |c|².
  const rows = [0, 1, 2, 3].map(() => [0, 0, 0, 0, 0]);
  for (const point of unit) {
    const terms = [...point, 1, point.reduce((sum, value) => sum + value * value, 0)];
    for (let i = 0; i < 4; i++) for (let j = 0; j < 5; j++) rows[i][j] += (terms[i] * terms[j]) / count;
  }
  const solved = solveSystem(rows);
  if (solved === null) return false;
  const centre = solved.slice(0, 3).map((value) => value / 2);
  const radius = Math.sqrt(solved[3] + centre.reduce((sum, value) => sum + value * value, 0));
  if (!(radius < 3)) return false;
  const square = unit.reduce((sum, point) => {
    const distance = Math.hypot(...point.map((value, axis) => value - centre[axis]));
    return sum + (distance / radius - 1) ** 2;
  }, 0);
  return Math.sqrt(square / count) < SPHERE_TOLERANCE;
}

/** @param {string} text @returns {InputKind} */
export function kindOf(text) {
  const rows = text
    .split(/\r\n|\r|\n/, LOOK_AT_LINES)
    .filter((line) => line.trim() !== "")
    .map(cellsOf);
  if (rows.length === 0) return "maps";
  const hasHeader = rows[0].slice(1).some((cell) => cell !== "" && !isNumber(cell));
  if (hasHeader) {
    const named = ["x", "y", "z"].every((axis) =>
      rows[0].some((cell) => new RegExp(`^${axis}([^a-z]|$)`, "i").test(cell)),
    );
    return named ? "electrodes" : "maps";
  }
  if (rows.every((cells) => cells.length === 1)) {
    return rows.every(([cell]) => !isNumber(cell) && WORD.test(cell)) ? "electrodes" : "maps";
  }
  const positions = rows.filter((cells) => cells.length === 4 && !isNumber(cells[0]) && cells.slice(1).every(isNumber));
  if (positions.length < rows.length - 1) return "maps";
  return lieOnSphere(positions.map((cells) => cells.slice(1).map(Number))) ? "electrodes" : "maps";
}
