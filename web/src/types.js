// The shapes of the two documents and of the page's own state, for the type checker. No code.

/** @typedef {{ level: 'note'|'warning'|'error', code: string, args: Record<string, number|string>, place: string, sentence: string }} Problem */
/** @typedef {[number, number]} Interval */
/** @typedef {'as_found'|'as_left'} PointState */
/** @typedef {{ reference?: string, indication?: string, uncertainty?: string, influences?: Record<string, string> }} Typed what stood in the cells of a row */

/**
 * @typedef {{
 *   reference?: number|null, indication?: number|number[]|null, state?: PointState, standard?: string|null, setting?: string|null,
 *   setting_uncertainty?: number|null, reference_uncertainty?: number|null, repeats?: number|null, indication_uncertainty?: number|null,
 *   influences?: Record<string, number>, approach?: 'up'|'down'|null, time?: string|null, note?: string, set_aside?: string|null, typed?: Typed
 * }} Point
 */

/** @typedef {{ kind: 'identity' } | { kind: 'linear', range: Interval } | { kind: 'square_root', range: Interval }} Nominal */
/** @typedef {{ kind: string, standard_uncertainty: number, source?: string }} CommonError */
/** @typedef {{ id: string, name?: string, serial?: string, certificate?: string, due?: string|null, errors?: CommonError[] }} Standard */

/**
 * @typedef {{
 *   name?: string, serial?: string, place?: string, quantity?: string, unit?: string, range?: Interval|null, hard_limits?: [number|null, number|null]|null,
 *   output?: { unit?: string|null, resolution?: number|null, nominal?: Nominal|null }, influences?: Record<string, { unit?: string }>
 * }} Instrument
 */

/** @typedef {string | { kind: string, degree?: number, knots?: number[] }} Term */
/** @typedef {'indication_from_reference'|'reference_from_indication'|'correction_from_indication'} Orientation */
/** @typedef {{ kind: 'unknown'|'known'|'stated', standard_deviation?: number|null, degrees_of_freedom?: number|null, profile?: unknown }} Noise */
/** @typedef {{ kind: string, [field: string]: any }} KnownBefore */
/** @typedef {{ orientation?: Orientation, terms?: Term[]|Term, noise?: Noise, known_before?: KnownBefore[], suspects?: unknown, candidates?: unknown }} Model */
/** @typedef {number | number[] | { indications: number[], influences?: Record<string, number> }} Asked */

/**
 * @typedef {{
 *   schema?: string, instrument?: Instrument, standards?: Standard[], occasion?: { date?: string|null, by?: string, notes?: string },
 *   points?: Point[], model?: Model, coverage?: number, conditions?: Record<string, number>, ask?: { at?: unknown[], readings?: Asked[] },
 *   recovered?: { outcome: string, sentence: string }, [field: string]: any
 * }} Visit
 */

/** @typedef {{ term: string, display: string, estimate: number, scale: number|null, standard_uncertainty: number|null, interval: Interval, unit: string }} TermReport */

/**
 * @typedef {{
 *   orientation: Orientation, formula: string, terms: TermReport[], noise: { kind: string, estimate: number|null, interval: Interval|null },
 *   degrees_of_freedom: number|null, condition_number: number, points_used: number, spanned: Interval
 * }} Fit
 */

/**
 * @typedef {{
 *   point: number, repeat: number, used: boolean, reference: number, indication: number, residual: number|null, leverage: number|null,
 *   left_out_tail: number|null, expanded_uncertainty: number|null, error: number|null, error_display: string, error_percent_of_span: number|null
 * }} PointReport
 */

/**
 * @typedef {{
 *   source: string, type: string, distribution: string, standard_uncertainty: number, unit: string, degrees_of_freedom: number|null,
 *   sensitivity: number, contribution: number, share_of_variance: number
 * }} BudgetLine
 */

/**
 * @typedef {{
 *   indications: number[], mean_indication: number, flags: string[], messages: Problem[], budget: BudgetLine[],
 *   linearised: { estimate: number, scale: number, degrees_of_freedom: number|null, slope: number }|null,
 *   value: {
 *     median: number, coverage_factor: number|null, expanded_uncertainty: number, interval: Interval, highest_density: Interval[],
 *     density: { x: number[], density: number[] }, display: string, display_interval: string
 *   }|null
 * }} Value
 */

/**
 * @typedef {{ x: number[], estimate: number[], curve_interval: Interval[], indication_interval: Interval[], nominal: number[]|null }} Curve
 */

/**
 * @typedef {{
 *   visit_digest: string|null, state: PointState, coverage: number,
 *   units: { input: string, output: string, response: string, argument: string, variable: string },
 *   fit: Fit|null, curve: Curve|null, points: PointReport[], checks: { check: string, code: string, sentence: string }[],
 *   messages: Problem[], as_found: Report|null
 * }} Report
 */

/** @typedef {{ outline(): Report, report(): Report, curve(first: number, last: number, count: number): Float64Array, read(reading: object): Value, free(): void }} Appraisal */
/** @typedef {{ value: number|null, alternatives: number[], problem: Problem|null }} Cell */
/** @typedef {string|{ influence: string }|null} Role */
/** @typedef {{ index: number, name: string, unit: string, role: Role, numbers: number }} Column */
/** @typedef {{ code: string, column: number|null, sentence: string, choices: { label: string, option: Record<string, any> }[] }} Question */
/** @typedef {{ columns: Column[], rows: string[][], points: Point[], problems: Problem[], questions: Question[], header: boolean }} Intake */
/** @typedef {'blank'|'identical'|'same'|'earlier_method'|'newer_program'|'differs'|'altered'} Outcome */
/** @typedef {{ visit: Visit|null, outcome: Outcome, sentence: string, changed: string[], field: string|null }} Opened */
/** @typedef {{ style: string, shell: string, seal: string, visit: string, wasm: string, program: string }} Texts */

/**
 * The functions of the core, as the bindings give them.
 * @typedef {{
 *   appraise(visit: object): Appraisal, canonical(visit: object): string, digest(visit: object): string, report_json(visit: object): string,
 *   intake_text(text: string, options: object): Intake, intake_bytes(bytes: Uint8Array, options: object): Intake, parse_cell(text: string): Cell,
 *   format_value(value: number, expanded: number, unit: string): string, format_interval(lo: number, hi: number, unit: string): string,
 *   format_number(value: number, significant: number): string, format_to(value: number, like: number): string,
 *   press(texts: Texts, visit: object): Uint8Array, open_texts(texts: Texts): Opened, open_bytes(bytes: Uint8Array): Opened, version(): string
 * }} Core
 */

/** @typedef {'error'|'value'|'residuals'|'table'} View */
/** @typedef {{ name: string, point?: number, intake?: { text: string|null, bytes: Uint8Array|null, source: string } }} Panel */
/** @typedef {{ level: 'note'|'warning'|'error', sentence: string, more?: string[], recover?: Opened }} Notice */
/** @typedef {{ text: string, influences: Record<string, string> }} Reading what is typed into the reading field: no part of the visit */
/** @typedef {{ problem: string|null, alternatives: number[][]|null, value: Value|null }} Answer */
/** @typedef {{ row: number, label: string, sentence: string }} Unread */
/** @typedef {{ report: Report, drawn: Drawn, asFoundCurve: Curve|null, unread: Unread|null }} Followed what the core says of a visit */
/** @typedef {{ visit: Visit, what: string, origin: string, merge: string|null }} Step */
/** @typedef {{ key: string, at: string, title: string, revision: number, visit: Visit, origin: string }} Draft */
/** @typedef {{ first: number, last: number, rows: Float64Array }} Drawn */

/**
 * Everything the page shows follows from this.
 * @typedef {{
 *   visit: Visit, origin: string, revision: number, past: Step[], future: Step[], lastMerge: string|null, saved: Visit|null,
 *   report: Report|null, drawn: Drawn|null, asFoundCurve: Curve|null, unread: Unread|null, busy: boolean, said: string, followedOf: Visit|null,
 *   reading: Reading, answer: Answer,
 *   view: View|null, panel: Panel|null, notice: Notice|null, notesOpen: boolean, entering: PointState, firstRow: number,
 *   opened: Opened|null, stage: 'sheet'|'leaf'|'altered', drafts: Draft[], mode: string
 * }} State
 */

/** @typedef {{ type: string, [field: string]: any }} Action */

export {};
