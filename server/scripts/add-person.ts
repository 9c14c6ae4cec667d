import { randomBytes, randomUUID } from 'node:crypto';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { emailAddress } from '#shared/site/people-contract.ts';
import { readConfiguration } from '../app/configuration.ts';
import { connectDatabase } from '../db/connect.ts';
import { addPerson } from '../features/account/add-person.ts';
import { hashPassword } from '../platform/password.ts';
import { Conflict } from '../platform/refuse.ts';

/**
 * `npm run person:add -- email "Name"`: an account on a server nobody can be invited from yet, as on an empty one with DEMO=off. Run it
 * with the server stopped: it takes the same lock on the data folder. Prints a made-up password, once; whoever signs in changes it.
 */
async function main(programArguments: readonly string[]): Promise<void> {
	const said = z.tuple([emailAddress, plainText(80)]).safeParse(programArguments);
	if (!said.success) throw new Error('Say an e-mail address and a name: npm run person:add -- ida@your-firm.example "Ida Roen"');
	const [email, name] = said.data;
	const password = randomBytes(15).toString('base64url');
	const passwordHash = await hashPassword(password);
	const connection = await connectDatabase(readConfiguration(process.env, []));
	try {
		const world = { newId: randomUUID, now: () => new Date() };
		await connection.db.transaction((tx) => addPerson(tx, world, { email, name, passwordHash }));
	} finally {
		await connection.close();
	}
	console.log(`${name} signs in as ${email} with the password ${password}\nIt is shown this once. Change it after the first sign-in.`);
}

try {
	await main(process.argv.slice(2));
} catch (error) {
	const isExpected = error instanceof Conflict || (error instanceof Error && error.constructor === Error);
	console.error(isExpected ? error.message : error);
	process.exitCode = 1;
}
