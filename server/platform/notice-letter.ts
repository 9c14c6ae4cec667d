import type { NoticeRod } from '#shared/mail/notice.ts';
import type { Letter } from './letter.ts';

interface LetterNotice {
	sentence: string;
	path: string;
	rod: NoticeRod | null;
}

interface NoticeLetterFacts {
	siteName: string;
	/** At least one, in the order they came due. */
	notices: readonly LetterNotice[];
	/** One matter of weight in a letter of its own: the sentence is the subject. */
	isAlone: boolean;
	/** The newest record of the site's chain; null before the first. */
	head: { sequence: number; sha256: string } | null;
	publicUrl: string;
}

/** What waits for a person on one site, each with the link to its very place. */
export function noticeLetter({ siteName, notices, isAlone, head, publicUrl }: NoticeLetterFacts): Letter {
	const urlOf = ({ path }: LetterNotice) => `${publicUrl}${path}`;
	const [first] = notices;
	const notes =
		head === null
			? []
			: [
					{
						words: `The site’s chain of records ends with record ${head.sequence}, ${head.sha256}. Keep this mail: it proves later that nothing up to there was changed.`,
						url: `${publicUrl}/verify`,
					},
				];
	if (isAlone && first !== undefined) {
		return {
			subject: `${siteName}: ${first.sentence.replace(/\.$/, '')}`,
			headline: first.sentence,
			paragraphs: [],
			...(first.rod === null ? {} : { items: [{ words: 'The figure:', url: urlOf(first), rod: first.rod }] }),
			act: { word: 'See it there', url: urlOf(first) },
			notes,
		};
	}
	const count = notices.length === 1 ? 'one thing is new for you' : `${notices.length} things are new for you`;
	return {
		subject: `${siteName}: ${count}`,
		headline: `On ${siteName}, ${count}`,
		paragraphs: [],
		items: notices.map((notice) => ({
			words: notice.sentence,
			url: urlOf(notice),
			...(notice.rod === null ? {} : { rod: notice.rod }),
		})),
		notes,
	};
}
