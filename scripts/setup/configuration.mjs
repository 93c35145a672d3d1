import { isAbsolute, join } from 'node:path';
import { Problem } from './problem.mjs';

/**
 * What start needs to know before anything is installed. The same settings, and all the others, are
 * checked by lib/server/env.ts once its packages are there.
 *
 * @param {NodeJS.ProcessEnv} source
 * @param {string[]} args words after the script's name
 * @param {string} root the repository; a relative DATA_DIR is taken from here
 * @returns {{ development: boolean, port: number, dataFolder: string, publicUrl: string, smtpUrl: string | undefined, mailFrom: string | undefined }}
 */
export function readConfiguration(source, args, root) {
  const unknown = args.filter((word) => word !== '--dev');
  if (unknown.length > 0) {
    throw new Problem(
      `Unknown option ${unknown[0]}. Swaypoint is configured by its environment, for example: PORT=3100 npm start`,
    );
  }
  const port = readPort(source.PORT);
  const folder = source.DATA_DIR || '.data';
  return {
    development: args.includes('--dev'),
    port,
    dataFolder: isAbsolute(folder) ? join(folder) : join(root, folder),
    publicUrl: source.PUBLIC_URL || `http://127.0.0.1:${port}`,
    smtpUrl: source.SMTP_URL || undefined,
    mailFrom: source.MAIL_FROM || undefined,
  };
}

function readPort(text) {
  if (text === undefined || text === '') return 3000;
  const port = Number(text);
  if (!/^\d+$/.test(text) || port < 1 || port > 65_535) {
    throw new Problem(
      `PORT is "${text}"; it must be a whole number from 1 to 65535, for example: PORT=3100 npm start`,
    );
  }
  return port;
}

/**
 * The environment of the web server, the worker and the scripts that prepare the database.
 *
 * @param {ReturnType<typeof readConfiguration>} configuration
 * @param {{ database: { host: string, port: number }, secrets: { databasePassword: string, sessionSecret: string }, catcher: { smtpUrl: string, url: string } | null }} parts
 */
export function childEnvironment(configuration, { database, secrets, catcher }) {
  const given = {
    NODE_ENV: configuration.development ? 'development' : 'production',
    PORT: String(configuration.port),
    DATA_DIR: configuration.dataFolder,
    DATABASE_HOST: database.host,
    DATABASE_PORT: String(database.port),
    DATABASE_USER: databaseUser,
    DATABASE_PASSWORD: secrets.databasePassword,
    DATABASE_NAME: databaseName,
    NEXTAUTH_SECRET: secrets.sessionSecret,
    NEXTAUTH_URL: configuration.publicUrl,
    PUBLIC_URL: configuration.publicUrl,
    SMTP_URL: configuration.smtpUrl ?? catcher?.smtpUrl,
    MAIL_FROM: configuration.mailFrom,
    CATCHER_URL: catcher?.url,
    NEXT_TELEMETRY_DISABLED: '1',
    TZ: 'UTC',
  };
  return { ...process.env, ...given };
}

export const databaseName = 'swaypoint';
export const databaseUser = 'swaypoint';
