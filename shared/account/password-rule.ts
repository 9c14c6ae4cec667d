import { z } from 'zod';

/** Length is what makes a password hard to guess; which characters are in it is nobody's business (NIST SP 800-63B, section 5.1.1.2). */
export const leastPasswordLength = 12;

/** A password as it is set, not as it is typed to sign in. Common ones are refused by the server, which has the list. */
export const newPassword = z
	.string()
	.min(leastPasswordLength, `At least ${leastPasswordLength} characters; a few words do well.`)
	.max(200, 'At most 200 characters.');
