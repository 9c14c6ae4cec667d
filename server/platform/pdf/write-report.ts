import PDFDocument from 'pdfkit';
import { registerFonts } from './fonts.ts';
import type { PrintedReport } from './report-blocks.ts';
import { footPt, marginPt, ReportPages, sizes } from './report-pages.ts';

/**
 * Prints a report: A4, tagged (PDF/UA), fonts embedded, "page n of m" on each page. The same report and moment give the same text.
 * Every string is checked against the fonts, so that no glyph vanishes.
 */
export function writeReport(report: PrintedReport): Promise<Uint8Array> {
	const options = {
		size: 'A4',
		margins: { top: marginPt, left: marginPt, right: marginPt, bottom: marginPt + footPt },
		pdfVersion: '1.7' as const,
		subset: 'PDF/UA',
		tagged: true,
		lang: 'en-GB',
		displayTitle: true,
		bufferPages: true,
		info: { Title: report.title, Author: report.author, CreationDate: report.printedAt, ModDate: report.printedAt },
	};
	// The types of the package do not know the subset PDF/UA.
	const doc = new PDFDocument(options as unknown as PDFKit.PDFDocumentOptions);
	const chunks: Buffer[] = [];
	const whole = new Promise<Uint8Array>((resolve, reject) => {
		doc.on('data', (chunk: Buffer) => chunks.push(chunk));
		doc.on('end', () => resolve(new Uint8Array(Buffer.concat(chunks))));
		doc.on('error', reject);
	});
	registerFonts(doc);
	const page = new ReportPages(doc);
	const root = doc.struct('Document');
	doc.addStructure(root);
	page.heading(root, 'H1', report.title, sizes.title);
	page.paragraph(root, report.subtitle, 'text');
	for (const { number, title, blocks } of report.sections) {
		const section = doc.struct('Sect');
		root.add(section);
		page.room(60);
		doc.y += 8;
		page.heading(section, 'H2', `${number}  ${title}`, sizes.section);
		for (const block of blocks) page.block(section, block);
		section.end();
	}
	root.end();
	page.feet(report.foot);
	doc.end();
	return whole;
}
