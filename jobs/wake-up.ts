import pg from 'pg';
import { WAKE_CHANNEL } from '@/lib/db/queues';
import { log } from '@/lib/log';

const RECONNECT_MS = 2_000;

/**
 * Listens for new jobs on a connection of its own (a pooler in transaction mode would lose them) and calls `onQueue` with the
 * queue's name. A lost connection is made again; polling covers the gap.
 */
export class WakeUp {
  private client: pg.Client | null = null;
  private stopped = false;
  private timer: NodeJS.Timeout | undefined;

  constructor(
    private readonly connectionString: string,
    private readonly onQueue: (queue: string) => void,
  ) {}

  async start(): Promise<void> {
    const client = new pg.Client({ connectionString: this.connectionString, keepAlive: true });
    client.on('error', (error) => {
      log.warn({ err: error }, 'wake-up.lost');
      this.again();
    });
    client.on('end', () => this.again());
    client.on('notification', (message) => this.onQueue(message.payload ?? ''));
    try {
      await client.connect();
      await client.query(`listen ${WAKE_CHANNEL}`);
      this.client = client;
    } catch (error) {
      log.warn({ err: error }, 'wake-up.failed');
      await client.end().catch(() => undefined);
      this.again();
    }
  }

  private again(): void {
    this.client = null;
    if (this.stopped || this.timer) return;
    this.timer = setTimeout(() => {
      this.timer = undefined;
      void this.start();
    }, RECONNECT_MS);
  }

  async stop(): Promise<void> {
    this.stopped = true;
    clearTimeout(this.timer);
    await this.client?.end().catch(() => undefined);
  }
}
