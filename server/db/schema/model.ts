import { sql } from 'drizzle-orm';
import {
	bigint,
	boolean,
	check,
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
import type { RevisionDetail } from '../../../shared/model/contract.ts';
import { requirements } from '../../../shared/model/requirement.ts';
import { characteristics } from '../../../shared/tolerance/sheet-schema.ts';
import { users } from './account.ts';
import { at, id, metres, sha256, siteId } from './columns.ts';
import { files } from './file.ts';
import { jobs } from './job.ts';
import { buildings, sites } from './site.ts';

export const revisionStateEnum = pgEnum('revision_state', ['reading', 'ready', 'failed', 'cancelled']);
export const characteristicEnum = pgEnum('characteristic', characteristics);

export const models = pgTable(
	'models',
	{
		id: id(),
		siteId: siteId().references(() => sites.id),
		buildingId: uuid('building_id'),
		name: text('name').notNull(),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.buildingId],
			foreignColumns: [buildings.siteId, buildings.id],
		}),
		unique('models_site_id').on(t.siteId, t.id),
		unique('models_name').on(t.siteId, t.name),
	],
);

export const revisions = pgTable(
	'revisions',
	{
		id: id(),
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		number: integer('number').notNull(),
		fileName: text('file_name').notNull(),
		fileSha256: sha256('file_sha256')
			.notNull()
			.references(() => files.sha256),
		fileBytes: bigint('file_bytes', { mode: 'number' }).notNull(),
		state: revisionStateEnum('state').notNull(),
		reason: text('reason'),
		/** Units, storeys, grid, map conversion, what was skipped and what was found: as read, once. */
		reading: jsonb('reading').$type<RevisionDetail['reading']>(),
		pictureSha256: sha256('picture_sha256').references(() => files.sha256),
		jobId: uuid('job_id').references(() => jobs.id),
		uploadedBy: uuid('uploaded_by')
			.notNull()
			.references(() => users.id),
		uploadedAt: at('uploaded_at').notNull(),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.modelId],
			foreignColumns: [models.siteId, models.id],
		}),
		unique('revisions_site_id').on(t.siteId, t.id),
		unique('revisions_number').on(t.modelId, t.number),
		check('revisions_ready_is_read', sql`${t.state} <> 'ready' or ${t.reading} is not null`),
		check('revisions_failed_says_why', sql`${t.state} <> 'failed' or ${t.reason} is not null`),
	],
);

export const elements = pgTable(
	'elements',
	{
		id: id(),
		siteId: siteId(),
		revisionId: uuid('revision_id').notNull(),
		entityNumber: integer('entity_number').notNull(),
		globalId: text('global_id').notNull(),
		class: text('class').notNull(),
		name: text('name').notNull(),
		tag: text('tag').notNull(),
		storey: text('storey').notNull(),
		mark: text('mark').notNull(),
		title: text('title').notNull(),
		lengthM: metres('length_m'),
		heightM: metres('height_m'),
		thicknessM: metres('thickness_m'),
		/** min x, y, z, max x, y, z, design frame. */
		boxM: doublePrecision('box_m').array(),
	},
	(t) => [
		foreignKey({
			columns: [t.siteId, t.revisionId],
			foreignColumns: [revisions.siteId, revisions.id],
		}),
		unique('elements_entity').on(t.revisionId, t.entityNumber),
		unique('elements_revision_id').on(t.revisionId, t.id),
		index('elements_global_id').on(t.globalId),
		check('elements_box_whole', sql`${t.boxM} is null or cardinality(${t.boxM}) = 6`),
	],
);

const finite = (column: string) => sql.raw(`"${column}" > '-Infinity' and "${column}" < 'Infinity'`);

export const checkpoints = pgTable(
	'checkpoints',
	{
		revisionId: uuid('revision_id').notNull(),
		id: text('id').notNull(),
		elementId: uuid('element_id').notNull(),
		/** The order in which the reading placed them. */
		position: integer('position').notNull(),
		/** Its own name for the field, beside its element's. */
		mark: text('mark').notNull().default(''),
		characteristic: characteristicEnum('characteristic').notNull(),
		label: text('label').notNull(),
		xM: metres('x_m').notNull(),
		yM: metres('y_m').notNull(),
		zM: metres('z_m').notNull(),
		/** Outward unit normal; a face has one. */
		normal: doublePrecision('normal').array(),
		/** z = a·x + b·y + c of a level's design surface. */
		surface: doublePrecision('surface').array(),
		isSoffit: boolean('is_soffit').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.revisionId, t.id] }),
		foreignKey({
			columns: [t.revisionId, t.elementId],
			foreignColumns: [elements.revisionId, elements.id],
		}),
		check('checkpoints_x_finite', finite('x_m')),
		check('checkpoints_y_finite', finite('y_m')),
		check('checkpoints_z_finite', finite('z_m')),
		check('checkpoints_face_has_normal', sql`(${t.characteristic} = 'face') = (${t.normal} is not null)`),
	],
);

export const requirementEnum = pgEnum('checkpoint_requirement', requirements);

/** What a person said of a checkpoint: it outlives a revision by the checkpoint's stable id. None said: required. */
export const checkpointChoices = pgTable(
	'checkpoint_choices',
	{
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		checkpointId: text('checkpoint_id').notNull(),
		requirement: requirementEnum('requirement').notNull(),
		reason: text('reason'),
		chosenBy: uuid('chosen_by')
			.notNull()
			.references(() => users.id),
		chosenAt: at('chosen_at').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.modelId, t.checkpointId] }),
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
		check('checkpoint_choices_left_out_says_why', sql`${t.requirement} <> 'left-out' or ${t.reason} is not null`),
	],
);

/** Names that people gave to elements, kept across revisions by GlobalId. */
export const elementMarks = pgTable(
	'element_marks',
	{
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		globalId: text('global_id').notNull(),
		mark: text('mark').notNull(),
		renamedBy: uuid('renamed_by')
			.notNull()
			.references(() => users.id),
		renamedAt: at('renamed_at').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.modelId, t.globalId] }),
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
		check('element_marks_length', sql`char_length(${t.mark}) between 1 and 16`),
	],
);

/** Checkpoints that people placed by picking on the model; a revision's own copy of each stands among its checkpoints. */
export const addedCheckpoints = pgTable(
	'added_checkpoints',
	{
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		id: text('id').notNull(),
		globalId: text('global_id').notNull(),
		/** After the element's mark: "X1". */
		markEnd: text('mark_end').notNull(),
		characteristic: characteristicEnum('characteristic').notNull(),
		label: text('label').notNull(),
		reason: text('reason').notNull(),
		xM: metres('x_m').notNull(),
		yM: metres('y_m').notNull(),
		zM: metres('z_m').notNull(),
		normal: doublePrecision('normal').array(),
		surface: doublePrecision('surface').array(),
		isSoffit: boolean('is_soffit').notNull(),
		/** The element's box where it was placed: in a revision that moves or reshapes the element it is not carried over. */
		boxM: doublePrecision('box_m').array().notNull(),
		addedBy: uuid('added_by')
			.notNull()
			.references(() => users.id),
		addedAt: at('added_at').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.modelId, t.id] }),
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
		check('added_checkpoints_face_has_normal', sql`(${t.characteristic} = 'face') = (${t.normal} is not null)`),
		check('added_checkpoints_box_whole', sql`cardinality(${t.boxM}) = 6`),
	],
);
