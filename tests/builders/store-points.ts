import { inspectPointTable } from '#shared/survey/inspect-point-table.ts';
import type { PointTableReading } from '#shared/survey/point-table-schema.ts';
import type { Api, TestServer } from '../routes/harness.ts';
import { uploadFile } from './upload-file.ts';

interface Surveyor {
	siteId: string;
	cookie: string;
	api: Api;
}
type ControlInput = Parameters<Api['control']['store']>[0];
type SurveyInput = Parameters<Api['survey']['store']>[0];

const bytesOf = (content: string | Uint8Array): Uint8Array => (typeof content === 'string' ? new TextEncoder().encode(content) : content);

/** How the file proposes to be read, in metres where it does not say. */
export function proposedReading(content: string | Uint8Array, over: Partial<PointTableReading> = {}): PointTableReading {
	const seen = inspectPointTable(bytesOf(content));
	if ('refused' in seen)
		return { encoding: 'utf-8', delimiter: ',', decimalMark: '.', hasHeader: true, unit: 'm', columns: { name: 0 }, ...over };
	const { encoding, delimiter, decimalMark, hasHeader, proposed, suggestedUnit } = seen;
	return { encoding, delimiter, decimalMark, hasHeader, unit: suggestedUnit ?? 'm', columns: proposed, ...over };
}

/** Brings a control list and stores it. */
export async function storeControl(
	server: TestServer,
	surveyor: Surveyor,
	content: string | Uint8Array,
	over: Partial<Omit<ControlInput, 'siteId' | 'uploadId'>> = {},
) {
	const uploadId = await uploadFile(server, surveyor, 'control.csv', content);
	const said = { name: 'Control', frame: 'design' as const, reading: proposedReading(content), defaultSigmaM: null };
	return surveyor.api.control.store({ siteId: surveyor.siteId, uploadId, ...said, ...over });
}

export const aSetup = (over: Partial<SurveyInput['setups'][number]> = {}): SurveyInput['setups'][number] => ({
	name: '1',
	levelling: 'levelled',
	bringsScale: true,
	pointSigmaM: null,
	commonMm: 0.5,
	instrumentHeightM: null,
	...over,
});

/** Brings a survey and stores it; one levelled set-up called "1" where nothing else is said. */
export async function storeSurvey(
	server: TestServer,
	surveyor: Surveyor,
	content: string | Uint8Array,
	over: Partial<Omit<SurveyInput, 'siteId' | 'uploadId'>> = {},
) {
	const uploadId = await uploadFile(server, surveyor, 'survey.csv', content);
	const survey = {
		name: 'Survey',
		stage: 'as-cast' as const,
		surveyedOn: '2025-11-26',
		observer: 'V. Ostrander',
		instrument: 'Total station',
		serial: '4711',
	};
	const said = { survey, setups: [aSetup()], reading: proposedReading(content) };
	return surveyor.api.survey.store({ siteId: surveyor.siteId, uploadId, ...said, ...over });
}
