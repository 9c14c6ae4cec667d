import type { Letter } from '../platform/letter.ts';

/** "Fri 5 Dec 17:00", by the site's clock. */
function hourWords(at: Date, timeZone: string): string {
	const day = new Intl.DateTimeFormat('en-GB', { weekday: 'short', day: 'numeric', month: 'short', timeZone }).format(at).replace(',', '');
	return `${day} ${new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit', hourCycle: 'h23', timeZone }).format(at)}`;
}

const flagsOf = (count: number): string => `${count} flag${count === 1 ? '' : 's'}`;

/** To a contractor: a check was published, so many flags are theirs to answer. */
export function publishedLetter(about: {
	siteName: string;
	timeZone: string;
	number: number;
	flags: number;
	answerBy: Date;
	url: string;
}): Letter {
	const { siteName, timeZone, number, flags, answerBy, url } = about;
	const until = hourWords(answerBy, timeZone);
	return {
		subject: `${siteName}: ${flagsOf(flags)} to answer by ${until}`,
		headline: `${flagsOf(flags)} in your pours, answer by ${until}`,
		paragraphs: [
			`Check ${number} is published. What it found outside its limits in your pours is listed with how far, which way, and on which survey.`,
			'Say for each: will be put right, a concession is asked for, or the measurement is contested. An answer can be changed until it is decided.',
		],
		act: { word: 'See the flags', url },
		notes: [{ words: 'If you need more time, ask for it on the flag: one tap.' }],
	};
}

/** To each person concerned, once: a check was withdrawn and its flags have lapsed. */
export function withdrawnLetter(about: { siteName: string; number: number; reason: string; lapsed: number; url: string }): Letter {
	const { siteName, number, reason, lapsed, url } = about;
	const gone =
		lapsed === 0
			? 'It had raised no flag.'
			: `${flagsOf(lapsed)} of it ${lapsed === 1 ? 'has' : 'have'} lapsed; nothing more is to be done about ${lapsed === 1 ? 'it' : 'them'}.`;
	return {
		subject: `${siteName}: check ${number} is withdrawn`,
		headline: `Check ${number} is withdrawn`,
		paragraphs: [`The reason given: ${reason}`, gone],
		act: { word: 'See what stands', url },
		notes: [],
	};
}
