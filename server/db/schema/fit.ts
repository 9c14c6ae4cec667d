import { sql } from 'drizzle-orm';
import { check, doublePrecision, foreignKey, integer, jsonb, pgEnum, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import type { PairsOfSetup, Relabelling, Shelving, SurveyorInCharge } from '../../../shared/fit/contract.ts';
import { type FitResult, fitKinds } from '../../../shared/fit/fit-schema.ts';
import type { FitNetwork } from '../../../shared/fit/network-schema.ts';
import { users } from './account.ts';
import { at, id, sha256, siteId } from './columns.ts';
import { controlSets } from './control.ts';
import { setups, surveys } from './survey.ts';

export const fitKindEnum = pgEnum('fit_kind', fitKinds);
export const fitStateEnum = pgEnum('fit_state', ['made', 'adopted', 'superseded']);

/** Set-ups of a survey that were adjusted together; never edited. */
export const fitNetworks = pgTable(
	'fit_networks',
	{
		id: id(),
		siteId: siteId(),
		surveyId: uuid('survey_id').notNull(),
		network: jsonb('network').$type<FitNetwork>().notNull(),
		inputsSha256: sha256('inputs_sha256').notNull(),
		madeBy: uuid('made_by')
			.notNull()
			.references(() => users.id),
		madeAt: at('made_at').notNull(),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.surveyId],
			foreignColumns: [surveys.siteId, surveys.id],
		}),
		unique('fit_networks_site_id').on(t.siteId, t.id),
	],
);

/** Never edited: adopted once, superseded by a newer one. */
export const fits = pgTable(
	'fits',
	{
		id: id(),
		siteId: siteId(),
		number: integer('number').notNull(),
		setupId: uuid('setup_id').notNull(),
		/** Made together with the fits of other set-ups; null for a fit of its own. */
		networkId: uuid('network_id'),
		controlSetId: uuid('control_set_id').notNull(),
		kind: fitKindEnum('kind').notNull(),
		knownScale: doublePrecision('known_scale'),
		shelves: jsonb('shelves').$type<Shelving[]>().notNull(),
		/** Targets taken for marks they are not named like, each with its reason. */
		relabellings: jsonb('relabellings').$type<Relabelling[]>().notNull().default([]),
		/** The pairs as they were, so that the fit can be computed again from itself. */
		pairs: jsonb('pairs').$type<PairsOfSetup>().notNull(),
		result: jsonb('result').$type<FitResult>().notNull(),
		inputsSha256: sha256('inputs_sha256').notNull(),
		state: fitStateEnum('state').notNull(),
		madeBy: uuid('made_by')
			.notNull()
			.references(() => users.id),
		madeAt: at('made_at').notNull(),
		adoptedBy: uuid('adopted_by').references(() => users.id),
		adoptedAt: at('adopted_at'),
		adoptedReason: text('adopted_reason'),
		/** The second person. */
		checkedBy: uuid('checked_by').references(() => users.id),
		checkedAt: at('checked_at'),
		checkedNote: text('checked_note'),
		surveyorInCharge: jsonb('surveyor_in_charge').$type<SurveyorInCharge>(),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.setupId],
			foreignColumns: [setups.siteId, setups.id],
		}),
		foreignKey({
			columns: [t.siteId, t.controlSetId],
			foreignColumns: [controlSets.siteId, controlSets.id],
		}),
		foreignKey({
			columns: [t.siteId, t.networkId],
			foreignColumns: [fitNetworks.siteId, fitNetworks.id],
		}),
		unique('fits_site_id').on(t.siteId, t.id),
		unique('fits_number').on(t.siteId, t.number),
		uniqueIndex('fits_one_adopted').on(t.setupId).where(sql`state = 'adopted'`),
		check(
			'fits_adopted_says_who',
			sql`${t.state} = 'made' or (${t.adoptedBy} is not null and ${t.adoptedAt} is not null and length(${t.adoptedReason}) > 0)`,
		),
		check('fits_checked_by_another', sql`${t.checkedBy} is null or ${t.checkedBy} <> ${t.adoptedBy}`),
	],
);
