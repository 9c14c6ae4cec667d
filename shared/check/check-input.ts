import type { Finding, FitResult } from '../fit/fit-schema.ts';
import type { Vector3 } from '../geometry/frame.ts';
import type { Checkpoint, Element } from '../model/model-schema.ts';
import type { Stage, ToleranceSheet } from '../tolerance/sheet-schema.ts';
import type { CheckSummary, DerivedResult, Deviation } from './check-schema.ts';

/** What a check is computed from. Metres; survey points in the survey frame of their set-up, checkpoints in the design frame. */

export interface CheckInputElement extends Pick<Element, 'class' | 'name' | 'tag' | 'storey' | 'mark' | 'title' | 'sizesM'> {
	/** The caller's own id of the element, which the deviations carry. */
	readonly id: string;
	/** null or absent: not known. */
	readonly exposed?: boolean | null;
	/** The element's own plan axis, counter-clockwise from east; for boxes along the element's axes. */
	readonly axisYawRad?: number | null;
}

export interface CheckInputCheckpoint extends Pick<Checkpoint, 'id' | 'mark' | 'characteristic' | 'label' | 'isSoffit'> {
	/** Design frame. */
	readonly place: Vector3;
	/** Outward unit normal of a face. */
	readonly direction: Vector3 | null;
	/** Level only: the design surface z = a·x + b·y + c. */
	readonly surface: Vector3 | null;
	readonly elementId: string;
}

export interface CheckInputSetup {
	readonly id: string;
	readonly name: string;
	/** Survey → design frame. */
	readonly fit: FitResult;
	/** Set-ups whose fits were made together with this one: the other's id, and the block of Q between this one's unknowns (rows) and its own (columns). */
	readonly tiedTo?: readonly { readonly setupId: string; readonly covariance: readonly (readonly number[])[] }[];
	/** What the set-up's points share and no residual shows. */
	readonly commonMm: number;
	/** Standard deviations along the survey axes for points that bring none; null: not known. */
	readonly pointSigmaM: Vector3 | null;
}

export interface CheckInputPoint {
	readonly name: string;
	readonly setupId: string;
	readonly surveyPoint: Vector3;
	readonly sigmaM?: Vector3 | null;
	/** Prism or ball radius, ply: taken off along the outward normal. */
	readonly offsetMm: number;
	readonly code?: string;
	readonly voided?: boolean;
}

export interface CheckInput {
	readonly elements: readonly CheckInputElement[];
	readonly checkpoints: readonly CheckInputCheckpoint[];
	readonly setups: readonly CheckInputSetup[];
	readonly points: readonly CheckInputPoint[];
	readonly sheet: ToleranceSheet;
	readonly stage: Stage;
	readonly building?: string;
	/** How far from its place a checkpoint may be met, metres. */
	readonly reachM?: number;
	/** The first axis of the grid, counter-clockwise from east; for boxes along the grid. 0 where it is not given, and said so. */
	readonly gridYawRad?: number | null;
}

export interface UnmatchedPoint {
	readonly name: string;
	readonly setupId: string;
	readonly reason: string;
}

export interface CheckOutput {
	/** One for every checkpoint, in the order given. */
	readonly deviations: Deviation[];
	/** Results from several checkpoints, where the sheet has a rule for them. */
	readonly derived: DerivedResult[];
	readonly findings: Finding[];
	readonly unmatchedPoints: UnmatchedPoint[];
	readonly summary: CheckSummary;
}
