import { spawn } from 'node:child_process';
import path from 'node:path';
import { createInterface } from 'node:readline';

export interface TestCluster {
  ownerUrl: string;
  appUrl: string;
  workerUrl: string;
  /** True when nobody else was using the server. */
  fresh: boolean;
  /** Lets go of the server; the last one to do so stops it. */
  release: () => Promise<void>;
}

/**
 * Starts the project's throwaway database server, or joins those who use it already. The script that holds it ends when its input
 * closes, so a test run that is killed lets go as well.
 *
 * Throws  with what the script said, when the server cannot be started.
 */
export async function holdTestCluster(root: string, env: NodeJS.ProcessEnv = process.env): Promise<TestCluster> {
  const holder = spawn(path.join(root, 'docker-free-dev.sh'), ['test-cluster', 'hold'], {
    env,
    stdio: ['pipe', 'pipe', 'pipe'],
  });
  let said = '';
  holder.stderr.setEncoding('utf8').on('data', (text: string) => (said += text));
  const ended = new Promise<void>((resolve) => holder.once('close', () => resolve()));
  const values: Record<string, string> = {};
  for await (const line of createInterface({ input: holder.stdout })) {
    const [name = '', ...rest] = line.split('=');
    values[name] = rest.join('=');
    if (name === 'FRESH') break;
  }
  const { DATABASE_URL: ownerUrl, DATABASE_APP_URL: appUrl, DATABASE_WORKER_URL: workerUrl, FRESH } = values;
  if (!ownerUrl || !appUrl || !workerUrl) {
    await ended;
    throw new Error(`The test database server did not start.\n${said}`);
  }
  return {
    ownerUrl,
    appUrl,
    workerUrl,
    fresh: FRESH === '1',
    release: async () => {
      holder.stdin.end();
      await ended;
    },
  };
}
