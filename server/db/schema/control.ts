import { sql } from 'drizzle-orm';
import { check, foreignKey, integer, jsonb, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { PointTableReading } from '../../../shared/survey/point-table-schema.ts';
import { users } from './account.ts';
import { at, id, metres, sha256, siteId } from './columns.ts';
import { files } from './file.ts';
import { sites } from './site.ts';

export const controlFrameEnum = pgEnum('control_frame', ['design', 'map']);
export const controlPointStateEnum = pgEnum('control_point_state', ['in-use', 'disturbed', 'lost']);

export const controlSets = pgTable(
	'control_sets',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		number: integer('number').notNull(),
		name: text('name').notNull(),
		frame: controlFrameEnum('frame').notNull(),
		fileName: text('file_name').notNull(),
		fileSha256: sha256('file_sha256')
			.notNull()
			.references(() => files.sha256),
		reading: jsonb('reading').$type<PointTableReading>().notNull(),
		storedBy: uuid('stored_by')
			.notNull()
			.references(() => users.id),
		storedAt: at('stored_at').notNull(),
	},
	(t) => [unique('control_sets_site_id').on(t.siteId, t.id), unique('control_sets_number').on(t.siteId, t.number)],
);

export const controlPoints = pgTable(
	'control_points',
	{
		id: id(),
		siteId: siteId(),
		controlSetId: uuid('control_set_id').notNull(),
		name: text('name').notNull(),
		code: text('code').notNull(),
		/** As given, in the set's frame. A benchmark has no plan. */
		givenXM: metres('given_x_m'),
		givenYM: metres('given_y_m'),
		givenZM: metres('given_z_m'),
		designXM: metres('design_x_m'),
		designYM: metres('design_y_m'),
		designZM: metres('design_z_m'),
		sigmaPlanM: metres('sigma_plan_m'),
		sigmaHeightM: metres('sigma_height_m'),
		state: controlPointStateEnum('state').notNull(),
		/** How it was set, by whom, its parent mark and last verification; asked for later. */
		howSet: text('how_set'),
		parentMark: text('parent_mark'),
		setBy: text('set_by'),
		verifiedAt: at('verified_at'),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.controlSetId],
			foreignColumns: [controlSets.siteId, controlSets.id],
		}),
		unique('control_points_name').on(t.controlSetId, t.name),
		check('control_points_plan_whole', sql`(${t.designXM} is null) = (${t.designYM} is null)`),
		check('control_points_known', sql`${t.designXM} is not null or ${t.designZM} is not null`),
		check(
			'control_points_sigma',
			sql`(${t.sigmaPlanM} is null or ${t.sigmaPlanM} >= 0) and (${t.sigmaHeightM} is null or ${t.sigmaHeightM} >= 0)`,
		),
	],
);
