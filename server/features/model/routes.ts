import { siteRoutes } from '../../platform/guard.ts';
import { addCheckpoint } from './add-checkpoint.ts';
import { chooseCheckpoints } from './choose-checkpoints.ts';
import { chooseReading } from './choose-reading.ts';
import { fieldCsvOf } from './field-csv.ts';
import { nameAxis, removeAxis } from './name-axis.ts';
import { placingPreviewOf, previewPlacing } from './preview-placing.ts';
import { checkpointsOf, elementsOf, modelsOf, pictureOf, revisionDetailOf } from './queries.ts';
import { readAgain } from './read-again.ts';
import { readModel } from './read-model.ts';
import { renameMarks } from './rename-marks.ts';
import { acceptSame, sameElementsOf } from './renewed-elements.ts';
import { saidOfReadingOf } from './said-of-reading.ts';

export const modelRoutes = {
	saidOfReading: siteRoutes.model.saidOfReading.handler(({ input, context: { platform, member } }) =>
		saidOfReadingOf(platform.db, member.siteId, input.modelId),
	),
	chooseReading: siteRoutes.model.chooseReading.handler(async ({ input, context: { platform, member } }) => {
		await chooseReading(platform, member, input);
		return saidOfReadingOf(platform.db, member.siteId, input.modelId);
	}),
	nameAxis: siteRoutes.model.nameAxis.handler(async ({ input, context: { platform, member } }) => {
		await nameAxis(platform, member, input);
		return saidOfReadingOf(platform.db, member.siteId, input.modelId);
	}),
	removeAxis: siteRoutes.model.removeAxis.handler(async ({ input, context: { platform, member } }) => {
		await removeAxis(platform, member, input);
		return saidOfReadingOf(platform.db, member.siteId, input.modelId);
	}),
	readAgain: siteRoutes.model.readAgain.handler(({ input, context: { platform, member } }) => readAgain(platform, member, input)),
	sameElements: siteRoutes.model.sameElements.handler(({ input, context: { platform, member } }) =>
		sameElementsOf(platform.db, member.siteId, input.revisionId),
	),
	acceptSame: siteRoutes.model.acceptSame.handler(({ input, context: { platform, member } }) => acceptSame(platform, member, input)),
	previewPlacing: siteRoutes.model.previewPlacing.handler(({ input, context: { platform, member } }) =>
		previewPlacing(platform, member, input),
	),
	placingPreview: siteRoutes.model.placingPreview.handler(({ input, context: { platform, member } }) =>
		placingPreviewOf(platform.db, member.siteId, input.previewId),
	),
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
