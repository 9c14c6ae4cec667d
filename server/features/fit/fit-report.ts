import type { PrintedReport } from '../../platform/pdf/report-blocks.ts';
import { writeReport } from '../../platform/pdf/write-report.ts';
import type { FitReportData } from './fit-report-data.ts';
import { foundSections } from './fit-report-results.ts';
import { givenSections } from './fit-report-sections.ts';
import { momentIn } from './fit-report-words.ts';

/** A fit's report in the order that the trade asks for, sections 1 to 17, before it is printed. Pure. */
export function fitReport(data: FitReportData): PrintedReport {
	const { fit, siteName, printedAt, timeZone } = data;
	const title = `Fit report ${fit.number}: set-up ${fit.setupName}`;
	return {
		title,
		subtitle: `${siteName}. Survey ${data.survey.number}, ${data.survey.surveyedOn}.`,
		foot: `${siteName}, fit ${fit.number}, printed ${momentIn(printedAt, timeZone)}; inputs ${fit.inputsSha256.slice(0, 16)}`,
		sections: [...givenSections(data), ...foundSections(data)],
		printedAt,
		author: fit.adoptedBy ?? fit.madeBy,
	};
}

/** The same as a PDF: A4, tagged, fonts embedded. */
export function fitReportPdf(data: FitReportData): Promise<Uint8Array> {
	return writeReport(fitReport(data));
}
