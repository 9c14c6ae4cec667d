import { siteRoutes } from '../../platform/guard.ts';
import { addCheckpoint } from './add-checkpoint.ts';
import { chooseCheckpoints } from './choose-checkpoints.ts';
import { fieldCsvOf } from './field-csv.ts';
import { checkpointsOf, elementsOf, modelsOf, pictureOf, revisionDetailOf } from './queries.ts';
import { readModel } from './read-model.ts';
import { renameMarks } from './rename-marks.ts';

export const modelRoutes = {
	list: siteRoutes.model.list.handler(({ context: { platform, member } }) => modelsOf(platform.db, member.siteId)),
	read: siteRoutes.model.read.handler(({ input, context: { platform, member } }) => readModel(platform, member, input)),
	revision: siteRoutes.model.revision.handler(({ input, context: { platform, member } }) =>
		revisionDetailOf(platform.db, member.siteId, input.revisionId),
	),
	elements: siteRoutes.model.elements.handler(({ input, context: { platform, member } }) =>
		elementsOf(platform.db, member.siteId, input.revisionId),
	),
	checkpoints: siteRoutes.model.checkpoints.handler(({ input, context: { platform, member } }) =>
		checkpointsOf(platform.db, member.siteId, input.revisionId),
	),
	picture: siteRoutes.model.picture.handler(async ({ input, context: { platform, member } }) => {
		const { pictureSha256, name } = await pictureOf(platform.db, member.siteId, input.revisionId);
		const bytes = await platform.files.read(pictureSha256);
		return new File([new Uint8Array(bytes)], name, { type: 'model/gltf-binary' });
	}),
	chooseCheckpoints: siteRoutes.model.chooseCheckpoints.handler(({ input, context: { platform, member } }) =>
		chooseCheckpoints(platform, member, input),
	),
	renameMarks: siteRoutes.model.renameMarks.handler(({ input, context: { platform, member } }) => renameMarks(platform, member, input)),
	addCheckpoint: siteRoutes.model.addCheckpoint.handler(({ input, context: { platform, member } }) =>
		addCheckpoint(platform, member, input),
	),
	fieldCsv: siteRoutes.model.fieldCsv.handler(async ({ input, context: { platform, member } }) => {
		const { name, text } = await fieldCsvOf(platform.db, member.siteId, input);
		return new File([text], name, { type: 'text/csv' });
	}),
};
