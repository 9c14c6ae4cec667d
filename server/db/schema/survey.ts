import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	date,
	doublePrecision,
	foreignKey,
	index,
	integer,
	jsonb,
	pgEnum,
	pgTable,
	primaryKey,
	text,
	unique,
	uuid,
} from 'drizzle-orm/pg-core';
import type { SetupObservation, SurveyObservation } from '../../../shared/survey/observation-record.ts';
import type { PointTableReading } from '../../../shared/survey/point-table-schema.ts';
import { stages } from '../../../shared/tolerance/sheet-schema.ts';
import { users } from './account.ts';
import { at, id, metres, millimetres, sha256, siteId } from './columns.ts';
import { files } from './file.ts';
import { jobs } from './job.ts';
import { sites } from './site.ts';

export const stageEnum = pgEnum('stage', stages);
export const surveyStateEnum = pgEnum('survey_state', ['storing', 'ready', 'failed']);
export const levellingEnum = pgEnum('levelling', ['levelled', 'free']);

export const surveys = pgTable(
	'surveys',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		number: integer('number').notNull(),
		name: text('name').notNull(),
		stage: stageEnum('stage').notNull(),
		surveyedOn: date('surveyed_on').notNull(),
		observer: text('observer').notNull(),
		instrument: text('instrument').notNull(),
		serial: text('serial').notNull(),
		fileName: text('file_name').notNull(),
		fileSha256: sha256('file_sha256')
			.notNull()
			.references(() => files.sha256),
		/** How it was measured, as far as it was said. */
		observation: jsonb('observation').$type<SurveyObservation>(),
		reading: jsonb('reading').$type<PointTableReading>().notNull(),
		state: surveyStateEnum('state').notNull(),
		reason: text('reason'),
		jobId: uuid('job_id').references(() => jobs.id),
		storedBy: uuid('stored_by')
			.notNull()
			.references(() => users.id),
		storedAt: at('stored_at').notNull(),
	},
	(t) => [unique('surveys_site_id').on(t.siteId, t.id), unique('surveys_number').on(t.siteId, t.number)],
);

/** One standing of the instrument, with a frame of its own. */
export const setups = pgTable(
	'setups',
	{
		id: id(),
		siteId: siteId(),
		surveyId: uuid('survey_id').notNull(),
		name: text('name').notNull(),
		levelling: levellingEnum('levelling').notNull(),
		bringsScale: boolean('brings_scale').notNull(),
		pointSigmaPlanM: metres('point_sigma_plan_m'),
		pointSigmaHeightM: metres('point_sigma_height_m'),
		commonMm: millimetres('common_mm').notNull(),
		instrumentHeightM: metres('instrument_height_m'),
		observation: jsonb('observation').$type<SetupObservation>(),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.surveyId],
			foreignColumns: [surveys.siteId, surveys.id],
		}),
		unique('setups_site_id').on(t.siteId, t.id),
		unique('setups_name').on(t.surveyId, t.name),
		check('setups_common', sql`${t.commonMm} >= 0 and ${t.commonMm} <= 1000`),
	],
);

export const surveyPoints = pgTable(
	'survey_points',
	{
		surveyId: uuid('survey_id')
			.notNull()
			.references(() => surveys.id),
		row: integer('row').notNull(),
		setupId: uuid('setup_id')
			.notNull()
			.references(() => setups.id),
		name: text('name').notNull(),
		code: text('code').notNull(),
		/** Survey frame of the set-up. */
		xM: metres('x_m').notNull(),
		yM: metres('y_m').notNull(),
		zM: metres('z_m').notNull(),
		sigmaM: doublePrecision('sigma_m').array(),
		offsetMm: millimetres('offset_mm').notNull(),
		/** Points of a set-up may be voided from a time on, with a reason. */
		voidedReason: text('voided_reason'),
	},
	(t) => [
		primaryKey({ columns: [t.surveyId, t.row] }),
		index('survey_points_setup').on(t.setupId),
		check(
			'survey_points_finite',
			sql`${t.xM} > '-Infinity' and ${t.xM} < 'Infinity' and ${t.yM} > '-Infinity' and ${t.yM} < 'Infinity' and ${t.zM} > '-Infinity' and ${t.zM} < 'Infinity'`,
		),
		check('survey_points_sigma_whole', sql`${t.sigmaM} is null or cardinality(${t.sigmaM}) = 3`),
	],
);
