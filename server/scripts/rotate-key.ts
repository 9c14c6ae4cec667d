import { addSigningKey } from '../platform/signing-keys.ts';

/** `npm run key:rotate`: a new signing key in the data folder (DATA_DIR). The server signs with it from its next start on. */
const dataDir = process.env.DATA_DIR ?? '.data';
const number = await addSigningKey(dataDir);
console.log(`Signing key ${number} is made in ${dataDir}/keys. Start the server anew: it signs with it and publishes its public half.`);
console.log('Keep the earlier keys’ public halves: records signed with them are verified by those.');
