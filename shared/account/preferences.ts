import { z } from 'zod';

/** How one person reads the product; kept at the server, so that every device shows the same. */
export const preferences = z.strictObject({
	/** `device`: as this device is set. */
	colourSet: z.enum(['device', 'light', 'dark', 'sun']),
	/** How lengths and deviations are shown; nothing is computed or stored in other than metres and millimetres. */
	lengths: z.enum(['mm', 'feet-inches']),
	decimalMark: z.enum(['.', ',']),
	/** Names of days and months. */
	dateLanguage: z.enum(['en', 'de', 'fr', 'es', 'it', 'pt', 'nl', 'pl']),
	/** What is told by mail besides what must be told: each kind in its own time, all gathered once a day, or not at all. */
	notices: z.enum(['at-once', 'digest', 'none']),
});
export type Preferences = z.infer<typeof preferences>;

export const defaultPreferences: Preferences = {
	colourSet: 'device',
	lengths: 'mm',
	decimalMark: '.',
	dateLanguage: 'en',
	notices: 'at-once',
};
