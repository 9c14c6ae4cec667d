import type { NoticeRod } from '#shared/mail/notice.ts';
import { rodHtml, rodText } from './letter-rod.ts';

/** What a mail says, before it is text or HTML. Plain sentences; nothing in it is markup. */
export interface Letter {
	subject: string;
	/** The first sentence, large: what happened. */
	headline: string;
	paragraphs: readonly string[];
	/** Several things, each with the address of its place on this server and its deviation where it has one. */
	items?: readonly { words: string; url: string; rod?: NoticeRod }[];
	/** The one act, with its address on this server. */
	act?: { word: string; url: string };
	/** Below the act, smaller: until when it holds, what to do if it was a mistake. */
	notes: readonly { words: string; url?: string }[];
}

const closing = 'Batterboard: is what was built near enough to the design?';

/** For readers of plain text; a link stands on a line of its own. */
export function textOf({ headline, paragraphs, items = [], act, notes }: Letter): string {
	return [
		headline,
		...paragraphs,
		...items.map(({ words, url, rod }) => [words, ...(rod === undefined ? [] : [rodText(rod)]), url].join('\n')),
		...(act === undefined ? [] : [`${act.word}:\n${act.url}`]),
		...notes.map(({ words, url }) => (url === undefined ? words : `${words}\n${url}`)),
		`-- \n${closing}`,
	].join('\n\n');
}

/** One column, ink on white, the string between its two edges; no picture and nothing fetched from outside. */
export function htmlOf({ subject, headline, paragraphs, items = [], act, notes }: Letter): string {
	const link = (url: string, words: string, style: string) => `<a href="${escaped(url)}" style="${style}">${escaped(words)}</a>`;
	const lines = [
		`<h1 style="font-size:22px;line-height:1.25;margin:20px 0 12px">${escaped(headline)}</h1>`,
		...paragraphs.map((words) => `<p style="margin:0 0 12px">${escaped(words)}</p>`),
		...items.map(
			({ words, url, rod }) =>
				`<div style="margin:0 0 16px;padding-top:10px;border-top:1px solid #D8D3C7">${link(url, words, 'color:#1E3A5C;font-weight:600')}${rod === undefined ? '' : rodHtml(rod)}</div>`,
		),
		act === undefined
			? ''
			: `<p style="margin:20px 0">${link(act.url, act.word, 'display:inline-block;padding:13px 22px;border-radius:6px;background:#1E3A5C;color:#FFFFFF;font-weight:600;text-decoration:none')}</p>`,
		...notes.map(
			({ words, url }) =>
				`<p style="margin:0 0 8px;font-size:14px;color:#56606B">${escaped(words)}${url === undefined ? '' : ` ${link(url, url, 'color:#1E3A5C')}`}</p>`,
		),
	];
	return `<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escaped(subject)}</title></head><body style="margin:0;background:#FFFFFF;color:#1B2430;font:16px/1.5 'Atkinson Hyperlegible Next',Verdana,sans-serif"><div style="max-width:560px;margin:0 auto;padding:24px 20px"><div style="font-weight:700;font-size:17px">Batterboard</div><div style="height:3px;margin-top:8px;background:#F2BE1A;border-top:1px solid #1B2430;border-bottom:1px solid #1B2430"></div>${lines.join('')}<p style="margin:24px 0 0;font-size:14px;color:#56606B">${escaped(closing)}</p></div></body></html>`;
}

function escaped(text: string): string {
	return text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;').replaceAll("'", '&#39;');
}
