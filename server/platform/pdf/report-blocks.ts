/** What a printed report is made of, before any page: pure data, so that its words can be tested without a PDF. */

export interface TableColumn {
	head: string;
	/** Share of the width. */
	share: number;
	align?: 'left' | 'right';
	isMono?: boolean;
}

export type ReportBlock =
	| { kind: 'text'; text: string; isStrong?: boolean }
	/** Names and values, a line each. */
	| { kind: 'facts'; rows: readonly (readonly [name: string, value: string])[] }
	| { kind: 'table'; caption: string; columns: readonly TableColumn[]; rows: readonly (readonly string[])[] }
	/** A drawing with its description for those who do not see it; `draw` gets its top left corner and size in points. */
	| {
			kind: 'figure';
			alt: string;
			heightPt: number;
			draw: (pen: Pen, box: { x: number; y: number; width: number; height: number }) => void;
	  };

/** The strokes a drawing may use; text is checked for its glyphs. */
export interface Pen {
	line: (
		points: readonly (readonly [number, number])[],
		style?: { widthPt?: number; dash?: readonly [number, number]; grey?: boolean },
	) => void;
	ellipse: (x: number, y: number, longPt: number, shortPt: number, turnRad: number) => void;
	dot: (x: number, y: number, radiusPt: number) => void;
	ring: (x: number, y: number, radiusPt: number) => void;
	word: (text: string, x: number, y: number, sizePt?: number) => void;
}

export interface ReportSection {
	number: number;
	title: string;
	blocks: readonly ReportBlock[];
}

export interface PrintedReport {
	title: string;
	/** Below the title: project, number. */
	subtitle: string;
	/** In the foot of every page: what, when. */
	foot: string;
	sections: readonly ReportSection[];
	printedAt: Date;
	author: string;
}
