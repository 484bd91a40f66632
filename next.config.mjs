/** @type {import('next').NextConfig} */
const config = {
  poweredByHeader: false,
  // Types are checked once, over the whole tree, by `npm run typecheck`: here it would only make a person wait for the start.
  typescript: { ignoreBuildErrors: true },
  // Compression belongs to the reverse proxy: a long CSV export is slower when Node compresses it.
  compress: false,
  outputFileTracingRoot: import.meta.dirname,
  turbopack: { root: import.meta.dirname },
  serverExternalPackages: [
    '@mikro-orm/core',
    '@mikro-orm/postgresql',
    '@mikro-orm/knex',
    '@mikro-orm/migrations',
    '@node-rs/argon2',
    'pg-boss',
    'pg',
    'pg-copy-streams',
    'pino',
    'exceljs',
    'busboy',
  ],
  // A page answers no JSON: the mailbox's machine-readable form is a route of its own under the page's address.
  rewrites: async () => ({
    beforeFiles: [
      {
        source: '/dev/mailbox',
        has: [{ type: 'query', key: 'format', value: 'json' }],
        destination: '/dev/mailbox/messages',
      },
    ],
    afterFiles: [],
    fallback: [],
  }),
};

export default config;
