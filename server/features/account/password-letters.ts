import type { Letter } from '../../platform/letter.ts';

/** The token stands behind the #: browsers send it to no server. */
export function resetLetter(publicUrl: string, token: string): Letter {
	return {
		subject: 'A new password for Batterboard',
		headline: 'Choose a new password',
		paragraphs: ['Somebody, most likely you, asked for a new password for this address.'],
		act: { word: 'Choose a new password', url: `${publicUrl}/reset#${token}` },
		notes: [
			{ words: 'The link holds for half an hour and for one use. With the new password you are signed out everywhere.' },
			{ words: 'It was not you? Then do nothing: your password stays as it is.' },
		],
	};
}

/** Told to the person whenever the password has changed, by whatever way. */
export function changedLetter(publicUrl: string): Letter {
	return {
		subject: 'Your Batterboard password was changed',
		headline: 'Your password was changed',
		paragraphs: ['All other sessions were ended.'],
		notes: [{ words: 'It was not you? Ask for a new password at once:', url: `${publicUrl}/reset` }],
	};
}

/** A code to sign in with; it stands in the subject too, so that a phone shows it without opening the mail. */
export function codeLetter(code: string): Letter {
	return {
		subject: `${code} is your Batterboard code`,
		headline: code,
		paragraphs: ['Write it where you asked for it. It holds for ten minutes, for one use, in that browser alone.'],
		notes: [{ words: 'You asked for none? Then do nothing, and give it to nobody.' }],
	};
}

/** Told to the person whenever a second factor comes or goes. */
export function factorLetter(publicUrl: string, what: string): Letter {
	return {
		subject: `${what} for Batterboard`,
		headline: what,
		paragraphs: ['It was done in your account, after your password, a code or a passkey was asked.'],
		notes: [{ words: 'It was not you? Set a new password at once:', url: `${publicUrl}/reset` }],
	};
}
