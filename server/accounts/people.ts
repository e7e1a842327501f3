import { prepared } from '../prepare.ts';
import { makeDemoPeople } from './demo.service.ts';

/** A command of its own: makes the demo's people with DEMO_PASSWORD in the database of DATABASE_URL, and ends. */
const { deps, failed } = await prepared('people');
const { config, db } = deps;
if (config.demoPassword === null) failed(new Error('DEMO_PASSWORD is not set; expected: the demo people’s password.'));
else await makeDemoPeople(db, config.demoPassword).catch(failed);
await db.close();
