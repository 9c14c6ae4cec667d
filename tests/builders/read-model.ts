import type { Api, TestServer } from '../routes/harness.ts';
import { followJob } from './follow-job.ts';
import { uploadFile } from './upload-file.ts';

interface Engineer {
	siteId: string;
	cookie: string;
	api: Api;
}

/** Uploads and reads a file as a new model, or as the next revision of one, and follows the reading to its end. */
export async function readModel(
	server: TestServer,
	engineer: Engineer,
	fileName: string,
	content: string | Uint8Array,
	model: { modelId: string } | { newName: string },
) {
	const { siteId, api } = engineer;
	const uploadId = await uploadFile(server, engineer, fileName, content);
	const { revisionId, jobId } = await api.model.read({ siteId, uploadId, model });
	const end = await followJob(api, siteId, jobId);
	const revision = (await api.model.list({ siteId })).flatMap(({ revisions }) => revisions).find((one) => one.revisionId === revisionId);
	if (revision === undefined) throw new Error('The revision is not in the list.');
	return { end, revision, jobId };
}
