import { sql } from 'drizzle-orm';
import {
	boolean,
	check as constraint,
	doublePrecision,
	foreignKey,
	integer,
	jsonb,
	pgEnum,
	pgTable,
	primaryKey,
	text,
	unique,
	uuid,
} from 'drizzle-orm/pg-core';
import { type CheckSummary, type DerivedResult, type Deviation, verdicts } from '../../../shared/check/check-schema.ts';
import type { CheckDetail } from '../../../shared/check/contract.ts';
import type { Finding } from '../../../shared/fit/fit-schema.ts';
import type { LeftOutCheckpoint } from '../../../shared/model/requirement.ts';
import { users } from './account.ts';
import { at, id, millimetres, sha256, siteId } from './columns.ts';
import { fits } from './fit.ts';
import { jobs } from './job.ts';
import { checkpoints, revisions } from './model.ts';
import { setups, stageEnum, surveys } from './survey.ts';
import { sheets } from './tolerance.ts';

export const checkStateEnum = pgEnum('check_state', ['computing', 'trial', 'published', 'withdrawn', 'failed']);
export const verdictEnum = pgEnum('verdict', verdicts);

/** The act of publishing: its notices' id, the flags that it raised, and those that it changed as they were. Dates are text in jsonb. */
export interface PublishedAct {
	actId: string;
	raisedIds: string[];
	changed: (Record<string, unknown> & { id: string; version: number })[];
}

export const checks = pgTable(
	'checks',
	{
		id: id(),
		siteId: siteId(),
		number: integer('number').notNull(),
		revisionId: uuid('revision_id').notNull(),
		surveyId: uuid('survey_id').notNull(),
		sheetId: uuid('sheet_id').notNull(),
		stage: stageEnum('stage').notNull(),
		state: checkStateEnum('state').notNull(),
		reason: text('reason'),
		jobId: uuid('job_id').references(() => jobs.id),
		summary: jsonb('summary').$type<CheckSummary>(),
		findings: jsonb('findings').$type<Finding[]>(),
		/** Plumb, section, flatness, bolt groups; null: computed before they were kept. */
		derived: jsonb('derived').$type<DerivedResult[]>(),
		unmatchedPoints: jsonb('unmatched_points').$type<CheckDetail['unmatchedPoints']>(),
		/** Checkpoints that were left out before the check, with the reason; null: none. */
		leftOut: jsonb('left_out').$type<LeftOutCheckpoint[]>(),
		inputsSha256: sha256('inputs_sha256').notNull(),
		/** The engine that computed it, so that a later one is told apart. */
		engineVersion: text('engine_version').notNull(),
		madeBy: uuid('made_by')
			.notNull()
			.references(() => users.id),
		madeAt: at('made_at').notNull(),
		publishedBy: uuid('published_by').references(() => users.id),
		publishedAt: at('published_at'),
		/** The contractors' deadline that was said before the press. */
		answerBy: at('answer_by'),
		/** What publishing did to the flags, while it can be taken back; null: it cannot. */
		publishedAct: jsonb('published_act').$type<PublishedAct>(),
		withdrawnBy: uuid('withdrawn_by').references(() => users.id),
		withdrawnAt: at('withdrawn_at'),
		withdrawnReason: text('withdrawn_reason'),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.revisionId],
			foreignColumns: [revisions.siteId, revisions.id],
		}),
		foreignKey({
			columns: [t.siteId, t.surveyId],
			foreignColumns: [surveys.siteId, surveys.id],
		}),
		foreignKey({
			columns: [t.siteId, t.sheetId],
			foreignColumns: [sheets.siteId, sheets.id],
		}),
		unique('checks_site_id').on(t.siteId, t.id),
		unique('checks_number').on(t.siteId, t.number),
		constraint(
			'checks_result_whole',
			sql`${t.state} not in ('trial', 'published', 'withdrawn') or (${t.summary} is not null and ${t.findings} is not null)`,
		),
		constraint(
			'checks_published_says_who',
			sql`${t.state} <> 'published' or (${t.publishedBy} is not null and ${t.publishedAt} is not null)`,
		),
		constraint('checks_withdrawn_says_why', sql`${t.state} <> 'withdrawn' or ${t.withdrawnReason} is not null`),
	],
);

/** Which fit carried each set-up's points. */
export const checkFits = pgTable(
	'check_fits',
	{
		checkId: uuid('check_id').notNull(),
		siteId: siteId(),
		setupId: uuid('setup_id').notNull(),
		fitId: uuid('fit_id').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.checkId, t.setupId] }),
		foreignKey({
			columns: [t.siteId, t.checkId],
			foreignColumns: [checks.siteId, checks.id],
		}),
		foreignKey({
			columns: [t.siteId, t.setupId],
			foreignColumns: [setups.siteId, setups.id],
		}),
		foreignKey({
			columns: [t.siteId, t.fitId],
			foreignColumns: [fits.siteId, fits.id],
		}),
	],
);

export const deviations = pgTable(
	'deviations',
	{
		checkId: uuid('check_id')
			.notNull()
			.references(() => checks.id),
		position: integer('position').notNull(),
		revisionId: uuid('revision_id').notNull(),
		checkpointId: text('checkpoint_id').notNull(),
		setupId: uuid('setup_id').references(() => setups.id),
		pointName: text('point_name'),
		pointCount: integer('point_count').notNull(),
		/** Design frame; null where nothing was measured. */
		measuredM: doublePrecision('measured_m').array(),
		notMeasuredReason: text('not_measured_reason'),
		deviationMm: millimetres('deviation_mm'),
		offsetMm: doublePrecision('offset_mm').array(),
		/** ee, en, nn. */
		covarianceMm2: doublePrecision('covariance_mm2').array(),
		uncertaintyParts: jsonb('uncertainty_parts').$type<Deviation['standardUncertaintyPartsMm']>(),
		expandedUncertaintyMm: millimetres('expanded_uncertainty_mm'),
		hasLimits: boolean('has_limits').notNull(),
		lowerMm: millimetres('lower_mm'),
		upperMm: millimetres('upper_mm'),
		/** A box in plan: its first axis, counter-clockwise from east. */
		boxYawRad: doublePrecision('box_yaw_rad'),
		/** Between repeats of the point. */
		spreadMm: millimetres('spread_mm'),
		ruleId: text('rule_id'),
		verdict: verdictEnum('verdict').notNull(),
		beyondMm: millimetres('beyond_mm'),
		conformity: doublePrecision('conformity'),
	},
	(t) => [
		primaryKey({ columns: [t.checkId, t.position] }),
		foreignKey({
			columns: [t.revisionId, t.checkpointId],
			foreignColumns: [checkpoints.revisionId, checkpoints.id],
		}),
		unique('deviations_checkpoint').on(t.checkId, t.checkpointId),
		constraint('deviations_not_measured_is_null', sql`(${t.deviationMm} is null) = (${t.measuredM} is null)`),
		constraint('deviations_number', sql`${t.deviationMm} is null or (${t.deviationMm} > '-Infinity' and ${t.deviationMm} < 'Infinity')`),
		constraint('deviations_conformity', sql`${t.conformity} is null or (${t.conformity} >= 0 and ${t.conformity} <= 1)`),
	],
);
