/** "Fri 5 Dec 17:00", by the site's clock. */
function hourWords(at: Date, timeZone: string): string {
	const day = new Intl.DateTimeFormat('en-GB', { weekday: 'short', day: 'numeric', month: 'short', timeZone }).format(at).replace(',', '');
	return `${day} ${new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit', hourCycle: 'h23', timeZone }).format(at)}`;
}

const flagsOf = (count: number): string => `${count} flag${count === 1 ? '' : 's'}`;

/** To a contractor: a check was published, so many flags are theirs to answer. */
export function publishedSentence(number: number, flags: number, answerBy: Date, timeZone: string): string {
	return `Check ${number} is published: ${flagsOf(flags)} in your pours to answer by ${hourWords(answerBy, timeZone)}.`;
}

/** To each person concerned, once: a check was withdrawn and its flags have lapsed. */
export function withdrawnSentence(number: number, reason: string, lapsed: number): string {
	const gone =
		lapsed === 0
			? 'It had raised no flag.'
			: `${flagsOf(lapsed)} of it ${lapsed === 1 ? 'has' : 'have'} lapsed; nothing more is to be done about ${lapsed === 1 ? 'it' : 'them'}.`;
	return `Check ${number} is withdrawn: ${/[.!?…]$/.test(reason) ? reason : `${reason}.`} ${gone}`;
}
