import type { FontStyle } from './fonts.ts';
import { pagePen } from './page-pen.ts';
import { printableRuns, type TextRun } from './printable.ts';
import type { ReportBlock, TableColumn } from './report-blocks.ts';

type Doc = PDFKit.PDFDocument;
type Struct = PDFKit.PDFStructureElement;

export const marginPt = 51;
export const footPt = 30;
export const sizes = { title: 19, section: 12.5, text: 9.5, small: 8.5 } as const;

/** The pages of a report as they fill. */
export class ReportPages {
	private readonly doc: Doc;
	/** Which font has which code point: asked once each. */
	private readonly glyphs = new Map<string, boolean>();
	constructor(doc: Doc) {
		this.doc = doc;
	}

	private get width(): number {
		return this.doc.page.width - 2 * marginPt;
	}

	private get bottom(): number {
		return this.doc.page.height - marginPt - footPt;
	}

	/** Begins a page where less than this is left. */
	room(heightPt: number): boolean {
		if (this.doc.y + heightPt <= this.bottom) return false;
		this.doc.addPage();
		this.doc.y = marginPt;
		return true;
	}

	heading(parent: Struct, tag: 'H1' | 'H2', text: string, size: number): void {
		parent.add(element(this.doc, tag, {}, () => this.write(text, 'strong', size, marginPt, this.width)));
		this.doc.y += 3;
	}

	paragraph(parent: Struct, text: string, style: FontStyle): void {
		this.room(this.height(text, style, sizes.text, this.width));
		parent.add(element(this.doc, 'P', {}, () => this.write(text, style, sizes.text, marginPt, this.width)));
		this.doc.y += 4;
	}

	block(parent: Struct, block: ReportBlock): void {
		if (block.kind === 'text') this.paragraph(parent, block.text, block.isStrong ? 'strong' : 'text');
		else if (block.kind === 'facts') {
			const columns: TableColumn[] = [
				{ head: '', share: 0.28 },
				{ head: '', share: 0.72 },
			];
			this.table(parent, columns, block.rows, null);
		} else if (block.kind === 'table') this.table(parent, block.columns, block.rows, block.caption);
		else {
			this.room(block.heightPt + 8);
			const box = { x: marginPt, y: this.doc.y, width: this.width, height: block.heightPt };
			parent.add(
				element(this.doc, 'Figure', { alt: block.alt, bbox: [box.x, box.y, box.x + box.width, box.y + box.height] }, () => {
					block.draw(
						pagePen(this.doc, (text) => this.runs(text, 'text')),
						box,
					);
				}),
			);
			this.doc.x = marginPt;
			this.doc.y = box.y + block.heightPt + 8;
		}
	}

	/** A table over as many pages as it needs, its head on each. Without a caption: names and values, the names its row heads. */
	private table(parent: Struct, columns: readonly TableColumn[], rows: readonly (readonly string[])[], caption: string | null): void {
		const { doc } = this;
		const table = doc.struct('Table');
		parent.add(table);
		if (caption !== null) {
			this.room(48);
			table.add(element(doc, 'Caption', {}, () => this.write(caption, 'strong', sizes.text, marginPt, this.width)));
			doc.y += 2;
			this.row(
				table,
				columns,
				columns.map(({ head }) => head),
				'head',
			);
		}
		for (const row of rows) {
			const height = this.rowHeight(columns, row, caption === null);
			// A head on a further page repeats for the eye only: the table has one.
			if (this.room(height) && caption !== null) this.repeatHead(columns);
			this.row(table, columns, row, caption === null ? 'fact' : 'body');
		}
		table.end();
		doc.x = marginPt;
		doc.y += 5;
	}

	private repeatHead(columns: readonly TableColumn[]): void {
		const { doc } = this;
		const heads = columns.map(({ head }) => head);
		this.cells(
			columns,
			heads,
			() => 'strong',
			sizes.small,
			(_, write) => {
				doc.markContent('Artifact', { type: 'Layout' });
				write();
				doc.endMarkedContent();
			},
		);
	}

	private row(table: Struct, columns: readonly TableColumn[], row: readonly string[], kind: 'head' | 'body' | 'fact'): void {
		const { doc } = this;
		const line = doc.struct('TR');
		table.add(line);
		const styleOf = (index: number): FontStyle => {
			if (kind === 'head' || (kind === 'body' && index === 0)) return 'strong';
			return columns[index]?.isMono ? 'mono' : 'text';
		};
		this.cells(columns, row, styleOf, kind === 'fact' ? sizes.text : sizes.small, (index, write) => {
			const isHead = kind === 'head' || index === 0;
			const scope = kind === 'head' ? 'Column' : 'Row';
			line.add(element(doc, isHead ? 'TH' : 'TD', isHead ? { scope } : {}, write));
		});
		line.end();
	}

	/** One row's cells side by side, a thin rule below. */
	private cells(
		columns: readonly TableColumn[],
		row: readonly string[],
		styleOf: (index: number) => FontStyle,
		size: number,
		put: (index: number, write: () => void) => void,
	): void {
		const { doc } = this;
		const top = doc.y;
		let x = marginPt;
		let lowest = top;
		columns.forEach(({ share, align = 'left' }, index) => {
			const width = share * this.width;
			const left = x;
			put(index, () => {
				doc.y = top;
				this.write(row[index] ?? '', styleOf(index), size, left, width - 6, align);
				lowest = Math.max(lowest, doc.y);
			});
			x += width;
		});
		doc.markContent('Artifact', { type: 'Layout' });
		doc
			.moveTo(marginPt, lowest + 1.5)
			.lineTo(marginPt + this.width, lowest + 1.5)
			.lineWidth(0.4)
			.strokeColor('#999999')
			.stroke();
		doc.endMarkedContent();
		doc.y = lowest + 3.5;
	}

	private rowHeight(columns: readonly TableColumn[], row: readonly string[], isFact: boolean): number {
		const size = isFact ? sizes.text : sizes.small;
		return 6 + Math.max(...columns.map(({ share }, index) => this.height(row[index] ?? '', 'strong', size, share * this.width - 6)));
	}

	private height(text: string, style: FontStyle, size: number, width: number): number {
		const plain = this.runs(text, style)
			.map((run) => (run.isExtended ? 'n'.repeat(run.text.length) : run.text))
			.join('');
		return this.doc
			.font(style)
			.fontSize(size)
			.heightOfString(plain === '' ? ' ' : plain, { width });
	}

	private runs(text: string, style: FontStyle): TextRun[] {
		return printableRuns(text, (codePoint, isExtended) => {
			const font = isExtended ? `${style}-ext` : style;
			const key = `${font} ${codePoint}`;
			const known = this.glyphs.get(key);
			if (known !== undefined) return known;
			this.doc.font(font);
			const found = hasGlyph(this.doc, codePoint);
			this.glyphs.set(key, found);
			return found;
		});
	}

	/** Writes at x from the present height on, in as many lines as it takes; an empty cell still has its line. */
	private write(text: string, style: FontStyle, size: number, x: number, width: number, align: 'left' | 'right' = 'left'): void {
		const { doc } = this;
		const runs = this.runs(text === '' ? ' ' : text, style);
		const y = doc.y;
		doc.fillColor('#000000').fontSize(size);
		// Right-aligned runs of two fonts would each be aligned by itself: such a cell is set from the left.
		const side = runs.length > 1 ? 'left' : align;
		runs.forEach((run, index) => {
			doc.font(run.isExtended ? `${style}-ext` : style);
			const options = { width, align: side, continued: index < runs.length - 1, features: ['tnum'] } as PDFKit.Mixins.TextOptions;
			if (index === 0) doc.text(run.text, x, y, options);
			else doc.text(run.text, options);
		});
	}

	/** "page n of m" and what this is, on every page: no part of the text. */
	feet(foot: string): void {
		const { doc } = this;
		const { start, count } = doc.bufferedPageRange();
		for (let index = 0; index < count; index++) {
			doc.switchToPage(start + index);
			doc.page.margins.bottom = 0;
			doc.markContent('Artifact', { type: 'Pagination' });
			doc.y = doc.page.height - marginPt - 8;
			const y = doc.y;
			this.write(foot, 'text', sizes.small, marginPt, this.width - 90);
			doc.y = y;
			this.write(`page ${index + 1} of ${count}`, 'text', sizes.small, doc.page.width - marginPt - 80, 80, 'right');
			doc.endMarkedContent();
		}
	}
}

interface ElementOptions {
	alt?: string;
	/** x, y of two corners, points from the page's top left. */
	bbox?: [number, number, number, number];
	scope?: 'Column' | 'Row';
}

/** A structure element with its content. The types of the package know neither a box nor a scope, nor content in that place. */
function element(doc: Doc, tag: string, options: ElementOptions, write: () => void): Struct {
	return doc.struct(tag, options as PDFKit.Mixins.StructureElementOptions, write as PDFKit.PDFStructureElementChild);
}

/** pdfkit keeps fontkit's font behind its own; a missing glyph is not asked for there. */
function hasGlyph(doc: Doc, codePoint: number): boolean {
	const { font } = (doc as unknown as { _font: { font: { hasGlyphForCodePoint: (codePoint: number) => boolean } } })._font;
	return font.hasGlyphForCodePoint(codePoint);
}
