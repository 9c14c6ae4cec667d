import type { TextRun } from './printable.ts';
import type { Pen } from './report-blocks.ts';

const ink = '#000000';
const grey = '#8a8a8a';

/** A pen over a page. @param runsOf a text as runs that have every glyph */
export function pagePen(doc: PDFKit.PDFDocument, runsOf: (text: string) => TextRun[]): Pen {
	return {
		line: (points, { widthPt = 0.8, dash, grey: isGrey = false } = {}) => {
			const [first, ...rest] = points;
			if (!first) return;
			doc
				.save()
				.lineWidth(widthPt)
				.strokeColor(isGrey ? grey : ink);
			if (dash) doc.dash(dash[0], { space: dash[1] });
			doc.moveTo(first[0], first[1]);
			for (const [x, y] of rest) doc.lineTo(x, y);
			doc.stroke().restore();
		},
		ellipse: (x, y, longPt, shortPt, turnRad) => {
			doc.save().lineWidth(0.6).strokeColor(grey);
			doc.rotate((-turnRad * 180) / Math.PI, { origin: [x, y] });
			doc.ellipse(x, y, longPt, shortPt).stroke().restore();
		},
		dot: (x, y, radiusPt) => {
			doc.save().fillColor(ink).circle(x, y, radiusPt).fill().restore();
		},
		ring: (x, y, radiusPt) => {
			doc.save().lineWidth(0.8).strokeColor(ink).circle(x, y, radiusPt).stroke().restore();
		},
		word: (text, x, y, sizePt = 7.5) => {
			let at = x;
			for (const run of runsOf(text)) {
				doc
					.font(run.isExtended ? 'text-ext' : 'text')
					.fontSize(sizePt)
					.fillColor(ink);
				doc.text(run.text, at, y, { lineBreak: false });
				at += doc.widthOfString(run.text);
			}
		},
	};
}
