import { resolve } from 'node:path';

/** Every program of ours is started in the checkout: the built server lies elsewhere than its source. */
export function migrationsFolder(): string {
	return resolve('drizzle');
}
