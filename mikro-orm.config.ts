import { ormConfig } from './lib/db/orm-config';

/** For the MikroORM command line: the owner's connection. */
export default ormConfig(process.env.DATABASE_URL ?? 'postgresql://slackwater@127.0.0.1:54329/slackwater');
