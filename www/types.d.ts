/*
 * Shapes that cross a border: the engine's glue, the report (the same keys as the JSON download),
 * the sheet the page lays out, and the messages between page and worker.
 */

/** Text or raw bytes of one input, as the engine takes them. */
type InwardContent = string | Uint8Array;

type MapUnit = "uV" | "V" | "relative";

/** A shell as it is stated: outer radius over the scalp's, conductivity in S/m. */
interface ShellSpec {
  tissue: string;
  ratio: number;
  conductivity: number;
}

/** What is left out, or null, is fitted to the electrodes or standard. */
interface HeadSettings {
  shells?: ShellSpec[] | null;
  centre_mm?: number[] | null;
  radius_mm?: number | null;
}

/** A published head to choose; the first of the catalogue is the default. */
interface CatalogueHead {
  name: string;
  title: string;
  source: string;
  shells: ShellSpec[];
}

interface ReportHead {
  /** Name in the catalogue, where the shells are exactly one of its. */
  name: string | null;
  centre_mm: number[];
  centre_is_fitted: boolean;
  radius_mm: number;
  radius_is_fitted: boolean;
  fit_rms_mm: number;
  fit_max_mm: number;
  shells: { tissue: string; outer_radius_mm: number; conductivity_s_per_m: number }[];
  unusual: boolean;
  /** The canonical x, y and z in the frame of the table. */
  axes: number[][];
}

/** Every setting is optional; the engine refuses what it does not know. */
interface EngineSettings {
  mapUnit?: MapUnit;
  exclude?: string[];
  interpolated?: string[];
  axes?: string | null;
  mirror?: boolean | null;
  unusualHead?: boolean;
  laplacian?: boolean | null;
  head?: HeadSettings | null;
  /** Maps, counted from 0, whose sign is turned. */
  flip?: number[];
  /** Whether the maps' sign means something. */
  polarity?: Polarity;
  /** Standard deviation of each map's activation, by the number of the map. */
  activationSd?: (number | null)[];
  assess?: string[];
  /** What is said about single files, by their names. */
  files?: Record<string, FileSettings>;
  units?: "m" | "cm" | "mm" | null;
  columns?: Record<string, string | number | null>;
  angles?: { polar?: string | null; unit?: string | null };
  orientation?: string | null;
  mapsAre?: string | null;
  columnsAre?: string | null;
  times?: { start: number; step: number; unit?: string } | null;
  baseline?: { from: number; to: number } | null;
  errors?: ErrorSettings;
  noise?: { sd: number } | { singleTrialSd: number; trials: number } | null;
  sources?: SourceSettings;
  limits?: LimitSettings;
}

/** What may be wrong about a fit, for its region and for single dipoles in an imperfect head. */
interface ErrorSettings {
  electrodesMm?: number;
  skullRatio?: [number, number] | null;
  /** Times the standard error of the sphere's fit. */
  sphere?: number;
  /** Weak sources that make up the noise; 0 for independent noise. */
  backgroundSources?: number;
  draws?: number;
  seed?: number;
}

/** The rule for the sources of reference populations. */
interface SourceSettings {
  draws?: number;
  seed?: number;
  maxEccentricity?: number;
  floor?: [number, number];
  orientation?: "isotropic" | "radial" | "tangential";
  noise?: number;
}

/** Limits of the verdict. */
interface LimitSettings {
  oneDipole?: number;
  ruledOut?: number;
  others?: number;
  loneElectrode?: number;
  coverageDeg?: number | null;
}

type VerdictWord = "lone-electrode" | "edge" | "below-the-brain" | "dipolar" | "paired" | "undecided" | "not-dipolar";

type PopulationKind = "noise" | "one-dipole" | "two-dipoles" | "five-dipoles" | "twenty-dipoles" | "hundred-dipoles";

/** (x − centre)ᵀ C⁻¹ (x − centre) ≤ scale², C from xx, xy, xz, yy, yz, zz; canonical axes, the scalp at radius 1. */
interface Ellipsoid {
  centre: number[];
  covariance: number[];
  scale: number;
}

/** How far a fit may be trusted, in words and as it is drawn. */
interface Trust {
  /** Null while no reference populations are kept. */
  verdict: {
    word: VerdictWord;
    text: string;
    reasons: { code: string; text: string; value: number | null; limit: number | null }[];
    hints: { code: string; text: string; basis: string }[];
  } | null;
  region: {
    sentence: string;
    rows: SheetRow[];
    causes: { cause: string; label: string; size: string; sd: string }[];
    /** Refitted positions, in the axes and the unit of a figure. */
    cloud: number[][];
    ellipsoid: Ellipsoid | null;
    noise_only: Ellipsoid | null;
    /** The residual's, in words. */
    structure: string;
    repeats: { sentence: string; rows: SheetRow[]; points: number[][] } | null;
    alt: string;
    notes: string[];
  };
  /** Those that are kept; percent without the sign. */
  populations: {
    kind: PopulationKind;
    label: string;
    draws: number;
    sentence: string;
    median: string;
    percentile_5: string;
    percentile_95: string;
    share_lower: string;
    share_lower_here: string;
    boundary: string;
  }[];
  /** Head, depth, number and orientation: stands beside every figure of populations. */
  rule: string;
  cautions: string[];
}

type ExplanationKind = "single" | "second-minimum" | "mirrored-pair" | "two-dipoles";

/** What else reproduces a map. The first of `kinds` is the single dipole, for comparison. */
interface Alternatives {
  sentence: string;
  kinds: {
    kind: ExplanationKind;
    label: string;
    sentence: string;
    decision: "reference" | "preferred" | "not-decidable" | "worse" | "refused";
    /** RV, adjusted RV in percent, parameters, distance in mm, F, difference of BIC, share of single dipoles in percent. */
    cells: string[];
    /** In the axes and the unit of a figure. */
    dipoles: { position: number[]; direction: number[] }[];
  }[];
  alt: string;
  notes: string[];
  /** Anew: a mirrored pair may stand; null without reference populations. */
  verdict: Trust["verdict"];
}

/** Each electrode left out in turn, the largest shift first: shift in mm, residual variance without it in percent. */
interface Influence {
  sentence: string;
  electrodes: { label: string; shift: string; rv: string; shift_mm: number; carries: boolean }[];
  notes: string[];
}

/** The fit under other heads and electrodes. `none`: why a change does not apply; `rv_change` as a fraction. */
interface WhatIf {
  sentence: string;
  rows: {
    change: string;
    label: string;
    shift: string;
    /** Change of depth in mm, signed: deeper is positive. */
    depth: string;
    rv: string;
    shift_mm: number;
    /** Where its bar begins and ends. */
    depth_mm: [number, number];
    rv_change: number;
    none: string | null;
  }[];
  notes: string[];
}

type SliceView = "above" | "behind" | "left";

/**
 * Residual variance over the brain in three slices through a point; in the axes and the unit of a figure. The rasters cover
 * the square from -`brain` to `brain`, first row at the top, NaN outside. u runs to the right and v upwards: x and y seen
 * from above, x and z from behind, -y and z from the left.
 */
interface Landscape {
  at: number[];
  best: number[];
  size: number;
  /** Radius of the innermost shell. */
  brain: number;
  slices: { view: SliceView; rv: Float32Array; contours: ContourLine[]; alt: string }[];
  /** The region's level, then residual variance and 1 %. */
  levels: { rv: number; label: string }[];
  sentence: string;
}

/** The dipole at a place chosen by hand, moved into the region of sources; its moment is fitted there. */
interface Probe {
  at: number[];
  direction: number[];
  rv: number;
  sentence: string;
  rows: SheetRow[];
  picture: Picture | null;
}

/** Electrodes that hold strikingly much of what is left over of many maps, share in percent; none where none stands out. */
interface Suspects {
  sentence: string;
  electrodes: { label: string; share: string; count: number; sentence: string }[];
  /** As the report has them. */
  found: object[];
}

/** A response over time. What a time point lacks is null; positions are in the axes and the unit of a figure. */
interface TimeCourse {
  times: number[];
  unit: string;
  gfp: (number | null)[];
  gfp_unit: string;
  rv: (number | null)[];
  positions: (number[] | null)[];
  strengths: (number | null)[];
  strength_unit: string;
  instants: { code: "onset" | "mid-rise" | "peak"; index: number; label: string }[];
  /** The field power up to which a map is near the noise. */
  floor: { gfp: number; sentence: string } | null;
  /** In the unit of the maps. */
  noise: { sd: number; sentence: string } | null;
  sentence: string;
  notes: string[];
}

/** One position over an interval; `strength` along the main axis, signed. */
interface FixedDipole {
  sentence: string;
  rows: SheetRow[];
  position: number[];
  direction: number[];
  rv: (number | null)[];
  strength: number[];
  strength_unit: string;
  at_boundary: boolean;
}

interface GroupsRequest {
  members: {
    name: string;
    subject?: string | null;
    dipoles: { map: number; position: number[]; direction: number[]; rv: number }[];
  }[];
  groups?: number | null;
  /** How far apart dipoles at one place count whose axes cross at a right angle; 30. */
  axisMm?: number;
}

/** Dipoles of several people in one head, largest group first. */
interface Groups {
  count: number;
  /** Mean silhouettes. */
  criterion: { groups: number; value: number; text: string }[];
  sentence: string;
  groups: {
    /** Place of the member and of the dipole among its. */
    members: [number, number][];
    subjects: number;
    position: number[];
    axis: number[];
    ellipsoid: Ellipsoid | null;
    /** Dipoles, people, position in mm, spread in mm and degrees, mean residual variance in percent. */
    cells: string[];
    sentence: string;
  }[];
  notes: string[];
}

/** Two numbers for each draw: residual variance; eccentricity, negative at the boundary. */
interface Populations {
  key: string;
  /** Key of the answer whose they are. */
  answer: number;
  kinds: Record<PopulationKind, Float64Array>;
  done: number;
  total: number;
  state: "waiting" | "drawing" | "done" | "stopped";
}

/** Draws as they are handed to a worker: those of one name are the same. */
interface GivenPopulations {
  name: string;
  kinds: Record<PopulationKind, Float64Array>;
}

interface FileSettings {
  role?: string | null;
  part?: string | null;
  encoding?: string | null;
  delimiter?: string | null;
  decimal?: string | null;
  label?: string | number | null;
}

/** One inference, which a setting changes: `path` has its keys from the outside in. */
interface Choice {
  setting: string;
  path: string[];
  file: string | null;
  value: ChoiceValue;
  options: { value: ChoiceValue; label: string }[];
  from: "setting" | "found" | "declared" | "assumed";
  sentence: string;
}

type ChoiceValue = string | number | boolean;

/** What was made of the files. */
interface Understood {
  files: UnderstoodFile[];
  choices: Choice[];
  columns_are: string;
  times: { times: number[]; unit: string } | null;
  labels: UnderstoodLabels;
}

interface UnderstoodFile {
  name: string;
  part: string | null;
  role: FileRole;
  format: string;
  encoding: string | null;
  rows: number;
  columns: number;
  header: boolean;
  used: { column: number; name: string; as: string }[];
  passed_over: string[];
}

interface UnderstoodLabels {
  matched: number;
  renamed: { from: string; to: string }[];
  without_value: string[];
  without_position: string[];
  not_scalp: string[];
  interpolated: string[];
  reference: string | null;
}

type Polarity = "arbitrary" | "declared";

/** Electrodes and maps, or files that are told apart by their content. */
interface EngineRequest {
  electrodes?: InwardContent;
  maps?: InwardContent;
  files?: { name: string; content: InwardContent }[];
  settings?: EngineSettings;
}

interface Program {
  name: string;
  version: string;
  build: string | null;
}

/** Where in which input something was found. */
interface Place {
  input: string | null;
  file: string | null;
  line: number | null;
  column: number | null;
  byte: number | null;
  label: string | null;
  map: string | null;
}

/** An error in the form it crosses borders with; `details` is a panic's text or a stack. */
interface Fault {
  code: string;
  message: string;
  where: Place | null;
  hint: string;
  details?: string;
}

interface ReportNote {
  code: string;
  severity: "info" | "warning";
  message: string;
  where: Place | null;
  values: object | null;
}

interface FittedMap {
  name: string;
  residual_variance: number;
  [key: string]: unknown;
}

interface UnfittedMap {
  name: string;
  error: Fault;
}

type ReportMap = FittedMap | UnfittedMap;

/**
 * Small rasters of maps as they are measured, laid out as in a picture: shares of each map's limit, NaN beyond what is
 * painted and all over for a map without values, whose limit is 0.
 */
interface Thumbnails {
  size: number;
  /** Angle from the top of the head at the rim of the disc. */
  rim_degrees: number;
  outline: Float32Array;
  measured: Float32Array[];
  limit: number[];
}

/** Several decompositions in numbers; what is asked about them has defaults: 5, 10, 15 %, seed 1, 4,000 draws. */
interface SummaryRequest {
  members: SummaryInput[];
  at?: number[];
  seed?: number;
  draws?: number;
}

interface SummaryInput {
  name: string;
  subject?: string | null;
  /** Null or not a number for a map that could not be fitted. */
  rv: (number | null)[];
  variance?: (number | null)[];
  /** Labels of those used. */
  electrodes?: string[];
  information?: number | null;
}

interface Summary {
  /** The thresholds in percent, as text. */
  labels: string[];
  members: {
    name: string;
    subject: string | null;
    information: number | null;
    fitted: number;
    /** Null where none is fitted. */
    share: (number | null)[];
    count: number[];
    /** Null unless the variance of every fitted component is known. */
    weighted_share: number[] | null;
    median_rv: number | null;
    /** Fitted; count and share at each threshold; weighted share at each; median. Percent without the sign. */
    cells: string[];
  }[];
  /** Decompositions of several subjects under one name; the band, from at least 5 subjects, by drawing subjects anew. */
  groups: {
    name: string;
    /** Places among the members. */
    members: number[];
    subjects: number;
    information: number | null;
    share: number[];
    low: (number | null)[];
    high: (number | null)[];
    curve: { rv: number[]; share: number[]; low: number[] | null; high: number[] | null };
    median_rv: number | null;
    /** Subjects; share and interval at each threshold; median. */
    cells: string[];
  }[];
  /** Of groups, over the subjects that both have. */
  differences: {
    a: number;
    b: number;
    subjects: number;
    difference: number[];
    low: (number | null)[];
    high: (number | null)[];
    /** Subjects; difference in percentage points and interval at each threshold. */
    cells: string[];
  }[];
  notes: ReportNote[];
}

/** Maps of two decompositions one to one, in descending order of |correlation|. */
interface Matches {
  /** Number of common electrodes. */
  electrodes: number;
  matches: {
    index_a: number;
    index_b: number;
    correlation: number;
    distance_mm: number | null;
    /** The two names, |r|, "same" or "opposite" sign, distance in mm. */
    cells: string[];
  }[];
  unmatched_a: number[];
  unmatched_b: number[];
}

interface ComparedStudy {
  name: string;
  subject?: string | null;
  information?: number | null;
  study: Study;
}

interface ComparisonSettings {
  at?: number[];
  seed?: number;
  draws?: number;
  /** Places in the list; without it, pairs of one subject, at most 45. */
  pairs?: [number, number][];
}

interface ChoiceOption {
  value: ChoiceValue;
  label: string;
}

/** A choice among fixed options. */
interface ChoiceOffer {
  setting: string;
  options: ChoiceOption[];
}

interface InwardReport {
  format: "inward-report";
  version: number;
  program: Program;
  inputs: { name: string; sha256: string }[];
  settings: EngineSettings;
  head: ReportHead;
  electrodes: { label: string; position_mm: number[]; used: boolean }[];
  maps: ReportMap[];
  notes: ReportNote[];
  understood: Understood;
}

/** One row of the numbers table; the engine has made text of every number. */
interface SheetRow {
  code: string;
  label: string;
  value: string;
  unit: string;
  meaning: string;
}

interface ContourLine {
  level: number;
  points: Float32Array;
}

interface DiscElectrode {
  label: string;
  x: number;
  y: number;
  used: boolean;
}

type MapRole = "measured" | "projected" | "residual";

/**
 * What is painted, in unit coordinates: x to the right, y to the front. The rasters cover the square from -1 to 1,
 * first row at the front; they reach two pixels beyond the outline and are NaN further out.
 */
interface Picture {
  size: number;
  measured: Float32Array;
  projected: Float32Array;
  residual: Float32Array;
  limit: number;
  stretch: number;
  levels: Float64Array;
  contours: Record<MapRole, ContourLine[]>;
  outline: Float32Array;
  rings: { degrees: number; radius: number }[];
  electrodes: DiscElectrode[];
  extremes: Record<MapRole, { max: number; min: number }>;
  /** Null near the centre of the head and below the rim. */
  dipole: { x: number; y: number; dx: number; dy: number } | null;
}

/**
 * An electrode with what the map has there, what the dipole predicts and the difference, as text. What is left out is
 * referred to the mean of the used ones.
 */
interface SheetElectrode {
  label: string;
  used: boolean;
  /** How far the prediction is off, without sign, to order by. */
  misfit: number;
  measured: string;
  projected: string;
  residual: string;
  /** Share of the left-over power, in percent without the sign; empty for one that is left out. */
  share: string;
}

/** The dipole in the head: x right, y front, z up from the centre, the scalp at radius 1. */
interface Figure {
  shells: { tissue: string; radius: number }[];
  /** In the order of the picture's electrodes. */
  electrodes: number[][];
  dipole: { position: number[]; direction: number[] };
  /** The map's sign is arbitrary, so that the dipole has no direction, only an axis. */
  axis: boolean;
}

/** A head without a dipole, or with one. */
type HeadFigure = Omit<Figure, "dipole"> & { dipole: Figure["dipole"] | null };

type HeadView = "above" | "behind" | "left" | "turned";

interface Sheet {
  sentence: string;
  rows: SheetRow[];
  head: { title: string; source: string; rows: SheetRow[] };
  /** In the order of the picture's electrodes. */
  electrodes: SheetElectrode[];
  figure: Figure;
  alt: Record<MapRole | HeadView, string>;
  /** The ends of the colour scale in words: without a sign, and the unit. */
  scale: { limit: string; unit: string };
  picture: Picture;
}

/** A study as the glue exports it. */
interface GlueStudy {
  readonly count: number;
  head(): ReportHead;
  electrodes(): InwardReport["electrodes"];
  notes(): ReportNote[];
  understood(): Understood;
  preamble(): InwardReport;
  fit(index: number): ReportMap;
  /** Fits from `first` on for about so long, a few maps at least. */
  fitWithin(first: number, milliseconds: number): ReportMap[];
  fits(first: number, last: number): Float64Array;
  /** The same as lines of a table, before `last`. */
  rowsWithin(first: number, last: number, milliseconds: number): (PackedRow | UnfittedMap)[];
  /** Sizes 8 to 64; null where the electrodes carry no interpolation. */
  thumbnails(indexes: number[], size: number): Thumbnails | null;
  /** Positions are three canonical millimetres for each map, NaN for one that is not fitted. */
  matches(other: GlueStudy, own: Float64Array, others: Float64Array, names?: string[]): Matches;
  /** The numerical rank of components, and what is to be said where it is less than their number. */
  rank(): { rank: number | null; note: ReportNote | null };
  assess(index: number, what: string[]): object;
  populationKey(): string;
  readonly populationSize: number;
  population(kind: PopulationKind, first: number, last: number, milliseconds: number): Float64Array;
  keepPopulation(kind: PopulationKind, numbers: Float64Array): void;
  trust(index: number): Trust | null;
  verdicts(first: number, last: number, milliseconds: number): (VerdictWord | null)[];
  alternatives(index: number): Alternatives | null;
  influence(index: number): Influence | null;
  whatIf(index: number): WhatIf | null;
  methods(done?: Partial<Done>): Methods;
  record(index: number, done?: Partial<Done>): TechnicalRecord;
  landscape(index: number, at?: Float64Array): Landscape | null;
  probe(index: number, at: Float64Array, picture: boolean): Probe | null;
  unshared(first: number, last: number, milliseconds: number): Float32Array;
  suspects(unshared: Float32Array): Suspects | null;
  sheet(index: number): Sheet;
  /** Null unless the maps are time points. Fits made before: position in scalp radii, strength, residual variance; NaN for none. */
  response(fits?: Float64Array): TimeCourse | null;
  /** Of the time points from `first` to `last`, both included. */
  fixed(first: number, last: number): FixedDipole | null;
  /** The same tables under other settings; nothing is read again. */
  with(settings: EngineSettings): GlueStudy;
  /** Other tables; what was prepared is used again where head and electrodes are the same. */
  beside(request: EngineRequest): GlueStudy;
  /** The same study with its files under other names. */
  renamed(names: Record<string, string>): GlueStudy;
  free(): void;
}

interface Glue {
  initSync(source: { module: WebAssembly.Module }): { memory: WebAssembly.Memory };
  analyse(request: EngineRequest): InwardReport;
  open(request: EngineRequest): GlueStudy;
  /** What a table is, by its content. */
  kindOf(content: InwardContent): InputKind;
  /** What a file is, by its content. */
  roleOf(name: string, content: InwardContent): FileRole;
  /** SHA-256 in hexadecimal. */
  digest(content: InwardContent): string;
  heads(): CatalogueHead[];
  /** Units that depend on the maps' are named together where none is given. */
  columns(unit?: MapUnit): TableColumn[];
  summary(request: SummaryRequest): Summary;
  groups(request: GroupsRequest): Groups;
  /** The mean of rasters with the angles at their rims, NaN where one is; signs turned to agree. */
  meanRaster(rasters: [Float32Array, number][], size: number): Float32Array;
  compare(list: object[], common?: object): object;
  Comparison: new () => {
    add(name: string, subject: string | null | undefined, information: number | null | undefined, study: GlueStudy): void;
    finish(settings?: ComparisonSettings): object;
    free(): void;
  };
  choices(): ChoiceOffer[];
  program(): Program;
}

/** The glue's text is put before the worker and the module by the build; each call gives a fresh instance. */
declare function wasmGlue(): Glue;

/** The invented maps, with the content of every file they name; put before the page's script by the build. */
declare const EXAMPLES: {
  files: Record<string, string>;
  list: (Omit<Example, "maps" | "beside" | "electrodes"> & { maps: string; beside: string[]; electrodes: string | null })[];
};

/** The engine itself, packed; put before the module by the build. */
declare const WASM_PACKED: string;

/** Style sheets of the answer; put before the page's script by the build. */
declare const ANSWER_STYLE: string;

/** Text, or an element: its name, its attributes and what is in it. */
type Markup = string | [string, Record<string, string>, ...Markup[]];

/** What is in the answer, from answer.html; put before the page's script by the build. */
declare const ANSWER_MARKUP: Markup[];

/** The style sheet of a report, and what a browser may do with one that was saved; put before the page's script by the build. */
declare const REPORT_STYLE: string;
declare const REPORT_POLICY: string;

/** A study as scripts see it; what stands after `close` is for the page's worker. */
interface Study {
  readonly head: ReportHead;
  readonly electrodes: InwardReport["electrodes"];
  readonly notes: ReportNote[];
  readonly understood: Understood;
  readonly count: number;
  fit(index: number): ReportMap;
  /** Fits as numbers alone, eight for each map from `first` to before `last`. */
  fits(first?: number, last?: number): Float64Array;
  assess(index: number, what: string[]): object;
  /** The same tables under other settings; nothing is read again. Both studies go on and are closed one by one. */
  with(settings: EngineSettings): Study;
  /** Other tables; what was prepared is used again where head and electrodes are the same. */
  beside(request: EngineRequest): Study;
  close(): void;
  /** The same study with its files under other names; it is not opened again after a trap. */
  renamed(names: Record<string, string>): Study;
  fitWithin(first: number, milliseconds: number): ReportMap[];
  rowsWithin(first: number, last: number, milliseconds: number): (MapRow | UnfittedMap)[];
  thumbnails(indexes: number[], size: number): Thumbnails | null;
  matches(other: Study, own: Float64Array, others: Float64Array, names?: string[]): Matches;
  rank(): { rank: number | null; note: ReportNote | null };
  /** Lets a call use the glue's study, of the instance that is current. */
  lend<T>(job: (study: GlueStudy) => T): T;
  preamble(): InwardReport;
  /** Equal for studies whose reference populations are the same. */
  populationKey(): string;
  /** Maps of each population. */
  readonly populationSize: number;
  /** Draws from `first` on for about so long, two numbers each: residual variance; eccentricity, negative at the boundary. */
  population(kind: PopulationKind, first: number, milliseconds: number, last?: number): Float64Array;
  /** Takes over draws 0, 1, … made elsewhere. */
  keepPopulation(kind: PopulationKind, numbers: Float64Array): void;
  /** Draws nothing; null for a map that cannot be fitted. */
  trust(index: number): Trust | null;
  /** From `first` on, before `last`, for about so long; null for a map that cannot be fitted. */
  verdicts(first: number, last: number, milliseconds: number): (VerdictWord | null)[];
  alternatives(index: number): Alternatives | null;
  influence(index: number): Influence | null;
  whatIf(index: number): WhatIf | null;
  /** In the words of a paper, by what was done beyond the fits. */
  methods(done?: Partial<Done>): Methods;
  /** A note on one map for a record; draws populations that a verdict needs and that were not handed over. */
  record(index: number, done?: Partial<Done>): TechnicalRecord;
  /** Three slices through a place in scalp radii, or through the best one. */
  landscape(index: number, at?: number[]): Landscape | null;
  /** The map with its dipole at a place by hand. */
  probe(index: number, at: number[], picture: boolean): Probe | null;
  /** What `suspects` rests on, for maps from `first` on, before `last`, for about so long: as many numbers each as electrodes are used. */
  unshared(first: number, last: number, milliseconds: number): Float32Array;
  /** Null for fewer than ten maps. */
  suspects(unshared: Float32Array): Suspects | null;
  sheet(index: number): Sheet;
  /** Null unless the maps are time points. Fits made before: position in scalp radii, strength, residual variance; NaN for none. */
  response(fits?: Float64Array): TimeCourse | null;
  /** Of the time points from `first` to `last`, both included. */
  fixed(first: number, last: number): FixedDipole | null;
}

interface Engine {
  /** Published heads to choose from. */
  readonly heads: CatalogueHead[];
  analyse(request: EngineRequest): InwardReport;
  open(request: EngineRequest): Study;
  kindOf(content: InwardContent): InputKind;
  roleOf(name: string, content: InwardContent): FileRole;
  /** SHA-256 in hexadecimal, of text as UTF-8. */
  digest(content: InwardContent): string;
  columns(unit?: MapUnit): TableColumn[];
  /** Near-dipolar shares, from numbers alone. */
  summary(request: SummaryRequest): Summary;
  groups(request: GroupsRequest): Groups;
  /** The mean of rasters with the angles at their rims, NaN where one is; signs turned to agree. */
  meanRaster(rasters: [Float32Array, number][], size: number): Float32Array;
  compare(list: object[], common?: object): object;
  /** The same from open studies. */
  compareStudies(list: ComparedStudy[], settings?: ComparisonSettings): object;
  choices(): ChoiceOffer[];
  program(): Program;
}

/** A fitted map in numbers to order and draw by, and in words in the order of the table's columns. */
interface MapRow {
  name: string;
  rv: number;
  adjusted_rv: number;
  degrees_of_freedom: number;
  canonical_mm: number[];
  canonical_direction: number[];
  position_mm: number[];
  depth_mm: number;
  eccentricity: number;
  strength: number;
  radial_share: number | null;
  at_boundary: boolean;
  nearest_site: string | null;
  side: string;
  /** Part of the head: "front-left" to "back-right", or "centre". */
  region: string;
  /** Mean square of the measured map over its electrodes. */
  power: number;
  /** That times the square of its activation's standard deviation, where this is given. */
  variance: number | null;
  flipped: boolean;
  cells: string[];
}

/** A row in pieces, for the way out of the engine: its numbers, and its words divided by NUL. */
type PackedRow = [number[], string];

/** One line of the list of maps. */
type MapSummary = MapRow | UnfittedMap;

/** A column of the table of maps. */
interface TableColumn {
  code: string;
  label: string;
  unit: string;
  meaning: string;
}

interface FitProgress {
  done: number;
  total: number;
}

/** Where the session is at; `left` in seconds, once that can be told; `about` while not every table has been opened. */
interface Progress extends FitProgress {
  left: number | null;
  about: boolean;
}

/**
 * A request that the page has given a key. Where several decompositions share what is left out, `lenient` says that labels
 * which this one does not have are not meant for it.
 */
interface NamedRequest extends EngineRequest {
  lenient?: boolean;
}

/** The tables of a study that the worker holds, under other settings. */
interface ChangedRequest {
  from: number;
  settings: EngineSettings;
  lenient?: boolean;
}

/** What is told of a table once it is opened. */
interface OpenedStudy {
  preamble: InwardReport;
  count: number;
}

/** What is told while maps are fitted: at first the table, where it was not opened before, then maps from one on. */
type PieceProgress = { study: OpenedStudy } | { first: number; maps: MapSummary[] };

/** Messages to a worker: about itself, about a file, about studies by their keys. */
type WorkerTask =
  | { kind: "program" }
  | { kind: "heads" }
  | { kind: "choices" }
  | { kind: "columns"; unit: MapUnit }
  | { kind: "roleOf"; name: string; content: InwardContent }
  | { kind: "digest"; content: InwardContent }
  | { kind: "preamble"; key: number; names: Record<string, string> }
  | { kind: "warm"; request: EngineRequest }
  | { kind: "open"; key: number }
  | { kind: "fit"; key: number; first: number; last: number | null; opening: boolean }
  | { kind: "sheet"; key: number; index: number }
  | { kind: "thumbnails"; key: number; indexes: number[]; size: number }
  | { kind: "summary"; request: SummaryRequest }
  | { kind: "matches"; keys: number[]; own: Float64Array; others: Float64Array; names: string[] }
  | { kind: "report"; key: number; names?: Record<string, string>; chosen: number; explained: number[]; populations: GivenPopulations | null }
  | { kind: "comparison"; keys: number[]; members: Omit<ComparedStudy, "study">[]; names?: Record<string, string>[]; settings: ComparisonSettings }
  | { kind: "population-key"; key: number }
  | { kind: "population"; key: number; population: PopulationKind; first: number; last: number }
  | { kind: "trust"; key: number; index: number; populations: GivenPopulations | null }
  | { kind: "verdicts"; key: number; populations: GivenPopulations }
  | { kind: "alternatives"; key: number; index: number; populations: GivenPopulations | null }
  | { kind: "influence"; key: number; index: number }
  | { kind: "what-if"; key: number; index: number }
  | { kind: "methods"; key: number; names?: Record<string, string>; done: Done }
  | { kind: "record"; key: number; names?: Record<string, string>; index: number; done: Done; populations: GivenPopulations | null }
  | { kind: "landscape"; key: number; index: number; at: number[] | null }
  | { kind: "probe"; key: number; index: number; at: number[]; picture: boolean }
  | { kind: "suspects"; key: number }
  | { kind: "response"; key: number; fits: Float64Array }
  | { kind: "fixed"; key: number; first: number; last: number }
  | { kind: "groups"; request: GroupsRequest }
  | { kind: "mean-raster"; rasters: [Float32Array, number][]; size: number }
  | { kind: "close"; key: number };

/** `named`: requests of the studies that the task needs and the worker does not hold. */
type WorkerMessage = WorkerTask & { id: number; named?: Record<number, NamedRequest | ChangedRequest> };

type WorkerReply =
  | { id: number; value: unknown }
  | { id: number; progress: FitProgress | PieceProgress }
  | { id: number; fault: Fault };

/** What was done beyond the fits: for methods anywhere in the work, for a record with its map. */
interface Done {
  region: boolean;
  populations: boolean;
  verdict: boolean;
  alternatives: boolean;
  influence: boolean;
  what_if: boolean;
  /** The course of a response over time. */
  course: boolean;
  /** Near-dipolar shares, up to `threshold`. */
  shares: boolean;
  threshold: number | null;
  /** Dipoles of several people in groups; their number where it was chosen by hand. */
  groups: boolean;
  group_count: number | null;
  /** Maps of two decompositions, one to one. */
  matches: boolean;
  decompositions: number;
  /** People that the decompositions come from, 0 where that is not known. */
  subjects: number;
}

interface Methods {
  paragraph: string;
  references: string[];
}

/** A technical note on one map. */
interface TechnicalRecord {
  title: string;
  parts: { heading: string; lines: string[] }[];
}

/** Settings as the session holds them. */
interface PageSettings extends EngineSettings {
  mapUnit: MapUnit;
  exclude: string[];
  flip: number[];
  polarity: Polarity;
  activationSd: (number | null)[];
  head?: PageHead;
}

/** What is left out is standard, or fitted to the electrodes. */
interface PageHead {
  shells?: ShellSpec[];
  centre_mm?: number[];
  radius_mm?: number;
}

/** An invented map that the page carries; without electrodes, positions are the standard ones. */
interface Example {
  name: string;
  title: string;
  line: string;
  /** Null or none where values have no unit. */
  unit?: MapUnit | null;
  maps: { name: string; content: string };
  /** Further decompositions of the same recording. */
  beside: { name: string; content: string }[];
  electrodes: { name: string; content: string } | null;
}

/** One input as the session holds it. */
interface Input {
  /** The file's name, or empty when pasted or typed. */
  name: string;
  content: InwardContent;
  /** What it is by its content; none where it was not looked at or cannot be read. */
  role?: FileRole;
  /** Why it cannot be read. */
  fault?: Fault;
}

type InputKind = "electrodes" | "maps";

type FileRole =
  | "electrodes"
  | "maps"
  | "electrodes-and-maps"
  | "labels"
  | "channels"
  | "coordinates"
  | "sphering"
  | "times"
  | "unused";

/** Two boxes, and all that stands beside them. */
interface Inputs extends Record<InputKind, Input | null> {
  others: Input[];
}

/**
 * One table of maps with all that belongs to it. What is current stands in the state itself too, where it is the same.
 * Shared by all are the head, electrodes left out or interpolated, that a head is unusual, and what is said of errors, sources and limits.
 */
interface Decomposition {
  id: number;
  name: string;
  /** Whether the user has given the name; otherwise it is made of the file's. */
  typed: boolean;
  /** Whose it is, empty where that is not known. */
  subject: string;
  /** Reduction of mutual information that the user has for it. */
  information: number | null;
  /** The map that is shown first, if it can be. */
  begin: number;
  inputs: Inputs;
  settings: PageSettings;
  example: ExampleTitle | null;
  /** Without a sheet while it is not the current one. */
  answer: Answer | null;
  failure: Fault | null;
}

/** All decompositions before a change. */
interface Step {
  decompositions: Decomposition[];
  current: number;
  setAside: SessionState["setAside"];
  /** Where the change was of it, too. */
  threshold?: number;
  /** What the change was of. */
  what: string[];
}

/**
 * `sphering`: a matrix that took the place of an unmixing matrix, and may be its sphering matrix; `former`: what gave way to
 * another table and may be kept beside it.
 */
interface Said {
  replaced: string[];
  dropped: string[];
  sphering?: Input;
  former?: Decomposition;
}

type Phase = "loading" | "ready" | "busy" | "answered" | "failed";

/** `edited`: it was typed on since. */
type ExampleTitle = { name: string; title: string; edited: boolean };

interface Answer {
  key: number;
  names: Record<InputKind, string | null>;
  /** The tables it was computed from. */
  inputs: Inputs;
  /** The invented map that it answers. */
  example: ExampleTitle | null;
  /** The settings it was computed with. */
  settings: PageSettings;
  preamble: InwardReport;
  count: number;
  /** Those from `fitted` on are of earlier settings, until they are fitted again. */
  maps: MapSummary[];
  fitted: number;
  chosen: number;
  /** Null while the chosen map could not be fitted. */
  sheet: Sheet | null;
  /** Of the chosen map; null until it is there. */
  trust: Trust | null;
  /** Of every map, null where it is not fitted; null until reference populations are there. */
  verdicts: (VerdictWord | null)[] | null;
}

/** What is told of the map of an answer beyond its trust; each null until it is there. */
interface Explained {
  key: number;
  chosen: number;
  alternatives: Alternatives | null;
  /** Whether other explanations are being looked for. */
  searching: boolean;
  influence: Influence | null;
  whatIf: WhatIf | null;
  landscape: Landscape | null;
  /** The dipole where it was moved by hand; null at the best fit. `kept` while something else is looked at. */
  hand: (Probe & { kept: boolean }) | null;
  /** The dipole at the place that is pointed at. */
  felt: Probe | null;
}

interface SessionState {
  phase: Phase;
  program: Program | null;
  inputs: Inputs;
  settings: PageSettings;
  /** Which settings were changed last; none when the inputs were. */
  changed: string[];
  /** Changes that can be undone, the last one last. */
  past: Step[];
  /** Files that gave way with the last change, and settings that went with them. */
  said: Said | null;
  /** Files that came in and led to no answer, while those of the answer stay. */
  refused: { inputs: Inputs; settings: PageSettings; id?: number } | null;
  heads: CatalogueHead[];
  offers: ChoiceOffer[];
  /** The invented map that was put in. */
  example: ExampleTitle | null;
  /** What the invented map has replaced. */
  setAside: { inputs: Inputs; settings: PageSettings; decompositions: Decomposition[]; current: number } | null;
  /** All there are, the current one among them; there is always one. */
  decompositions: Decomposition[];
  /** The current one's id. */
  current: number;
  /** Columns of the table of maps. */
  columns: TableColumn[];
  answer: Answer | null;
  failure: Fault | null;
  /** Label of the electrode that is pointed at, wherever on the page. */
  pointed: string | null;
  progress: Progress | null;
  /** Maps still to be fitted were given up. */
  stopped: boolean;
  /** Whether files of many that came together are still to be recognised. */
  arriving: boolean;
  /** The residual variance up to which maps count as near-dipolar. */
  threshold: number;
  /** Whether names of files and people go along with what leaves the page. */
  namesShown: boolean;
  /** Of the current decomposition. */
  populations: Populations | null;
  explained: Explained;
  /** With the key of the answer whose they are. */
  suspects: (Suspects & { key: number }) | null;
  /** Indexes of the maps in the order of the list, which may be filtered. */
  listed: number[];
}
