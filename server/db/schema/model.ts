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
import type { PlacingPreview } from '../../../shared/model/choices-contract.ts';
import type { RevisionDetail } from '../../../shared/model/contract.ts';
import { requirements } from '../../../shared/model/requirement.ts';
import type { CheckpointDensity } from '../../../shared/site/site-settings.ts';
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
		/** The file's own, where the element is known under another. */
		fileGlobalId: text('file_global_id'),
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

export const readingSubjectEnum = pgEnum('reading_subject', ['unit', 'map-scale']);

/** Which of two readings of a file's unit or map scale a person holds for right; later readings of the model go by it. */
export const readingChosen = pgTable(
	'reading_chosen',
	{
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		subject: readingSubjectEnum('subject').notNull(),
		/** Metres per unit, or which reading of the scale. */
		choice: text('choice').notNull(),
		reason: text('reason').notNull(),
		chosenBy: uuid('chosen_by')
			.notNull()
			.references(() => users.id),
		chosenAt: at('chosen_at').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.modelId, t.subject] }),
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
	],
);

/** Axes named through two picked points, of a building; where a model has none, of that model. Plan, design frame. */
export const pickedAxes = pgTable(
	'picked_axes',
	{
		id: id(),
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		buildingId: uuid('building_id'),
		tag: text('tag').notNull(),
		fromXM: metres('from_x_m').notNull(),
		fromYM: metres('from_y_m').notNull(),
		toXM: metres('to_x_m').notNull(),
		toYM: metres('to_y_m').notNull(),
		pickedBy: uuid('picked_by')
			.notNull()
			.references(() => users.id),
		pickedAt: at('picked_at').notNull(),
	},
	(t) => [
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
		foreignKey({ columns: [t.siteId, t.buildingId], foreignColumns: [buildings.siteId, buildings.id] }),
		index('picked_axes_site').on(t.siteId),
		check('picked_axes_tag', sql`char_length(${t.tag}) between 1 and 4`),
	],
);

/** GlobalIds that a newer file gives to elements known under another: accepted by a person, so that names, pours and choices keep. */
export const knownElements = pgTable(
	'known_elements',
	{
		siteId: siteId(),
		modelId: uuid('model_id').notNull(),
		globalId: text('global_id').notNull(),
		knownAs: text('known_as').notNull(),
		acceptedBy: uuid('accepted_by')
			.notNull()
			.references(() => users.id),
		acceptedAt: at('accepted_at').notNull(),
	},
	(t) => [
		primaryKey({ columns: [t.modelId, t.globalId] }),
		foreignKey({ columns: [t.siteId, t.modelId], foreignColumns: [models.siteId, models.id] }),
	],
);

/** What another density would place on the site's newest revisions: the last one that was asked for. */
export const placingPreviews = pgTable('placing_previews', {
	id: id(),
	siteId: siteId().references(() => sites.id),
	askedBy: uuid('asked_by')
		.notNull()
		.references(() => users.id),
	askedAt: at('asked_at').notNull(),
	placing: jsonb('placing').$type<CheckpointDensity>().notNull(),
	counted: jsonb('counted').$type<PlacingPreview['models']>(),
});
