import pg from 'pg';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { evaluateAlert, type EvaluateAlertDeps } from '@/lib/commands/evaluate-alert';
import { closeOrm } from '@/lib/db/orm';
import { MailUnavailable, type MailSender } from '@/lib/mail/sender';
import { AlertScene, runAs } from '../mail/alert-scene';
import { FakeMailService } from '../mail/fake-service';
import { createTestDatabase } from '../support/database';

const DAY = '2026-07-24';
const service = new FakeMailService();
let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: pg.Client;
let scene: AlertScene;

beforeAll(async () => {
  service.listen();
  database = await createTestDatabase();
  owner = new pg.Client({ connectionString: database.ownerUrl });
  await owner.connect();
  await runAs(database, 'worker');
});
afterAll(async () => {
  service.close();
  await closeOrm();
  await owner.end();
  await database.drop();
});
beforeEach(async () => {
  service.reset();
  scene = await AlertScene.create(owner);
});

const deps = (changes: Partial<EvaluateAlertDeps> = {}): EvaluateAlertDeps => ({
  mail: service.sender,
  publicUrl: 'https://slackwater.example',
  secret: 'a secret of the tests, longer than thirty-two characters',
  ...changes,
});
const evaluate = async (day = DAY, changes: Partial<EvaluateAlertDeps> = {}, of = scene) =>
  evaluateAlert(await of.run(day), deps(changes));

/** Backwards from 12:00 to 19:00, most at 15:05; forward otherwise. */
const afternoon = (hour: number, minute: number) => {
  if (hour < 12 || hour >= 19) return 80;
  return hour === 15 && minute === 5 ? -966 : -300 - minute;
};
const oneLine = (text: string) => text.replace(/\s+/g, ' ');

describe('who gets the mail', () => {
  it('is each operator of the organization once, and nobody else', async () => {
    const foreign = await AlertScene.create(owner);
    await foreign.person('operator');
    const operators = [await scene.person('operator'), await scene.person('operator')];
    for (const role of ['engineer', 'owner', 'consultant']) await scene.person(role);
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    expect(service.to()).toEqual(operators.map((each) => each.email).sort());
    expect((await scene.deliveries()).map((each) => each.status)).toEqual(['sent', 'sent']);
    expect(await scene.outcome(DAY)).toEqual({ outcome: 'sent', detail: 'Ran backwards 7 h; mailed to 2 operators.' });
  });

  it('is not someone whose mail is stopped, and the run says so', async () => {
    const { id } = await scene.person('operator');
    await owner.query(`update app_user set mail_suppressed_at = now() where id = $1`, [id]);
    const other = await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    expect(service.to()).toEqual([other.email]);
    expect((await scene.deliveries()).map((each) => each.status).sort()).toEqual(['sent', 'suppressed']);
    expect((await scene.outcome(DAY)).detail).toBe(
      'Ran backwards 7 h; mailed to 1 operator; 1 operator takes no mail.',
    );
  });

  it('is nobody where no operator takes mail', async () => {
    await scene.person('engineer');
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    expect(service.sent).toEqual([]);
    expect((await scene.outcome(DAY)).outcome).toBe('no-recipients');
  });

  it('is nobody when a run is asked for under another organization', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    const { runId } = await scene.run(DAY);
    const foreign = await AlertScene.create(owner);
    await foreign.person('operator');
    await evaluateAlert({ organizationId: foreign.organizationId, runId }, deps());
    expect(service.sent).toEqual([]);
    expect((await scene.outcome(DAY)).outcome).toBe('pending');
  });
});

describe('what the mail says', () => {
  it('is what the intervals and hours of the day hold', async () => {
    await scene.person('operator');
    const intervals = await scene.storeDay(DAY, afternoon);
    await evaluate();
    const [mail] = service.sent;
    const text = oneLine(mail?.text ?? '');
    const back = intervals.filter((each) => each.bypassFlowGpm < 0);
    const warmest = Math.max(...back.map((each) => each.blendedSupplyF));
    expect(back.length * 5).toBe(420);
    expect(mail?.subject).toBe(
      `East energy centre ran backwards 7 h on Fri 24 Jul; supply reached ${warmest.toFixed(1)} F`,
    );
    expect(text).toContain(`12:00 - 19:00 -966 gpm ${warmest.toFixed(1)} F`);
    expect(text).toContain('Low delta-T hours 7 of 24');
    expect(text).toContain(`Excess energy cost ${(back.length * 0.25).toFixed(2)} USD`);
    expect(text).toContain('Likely cause reverse flow');
    expect(text).toContain('100 % of the day');
    expect(text).toContain('at 15:05, 2 of 3 units ran and made 1,720 gpm while the buildings drew 2,686 gpm');
    expect(text).toContain('lies between 876 and 1,056');
    expect(text).toContain('when production made 44.0 F');
  });

  it('links to its own acknowledgement and the worst hour, and lets a mail program unsubscribe in one tap', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    const [mail] = service.sent;
    expect(mail?.text).toMatch(/https:\/\/slackwater\.example\/a\/[\w-]{44}\n/);
    // Most came back at 15:05 in New York: the hour from 19:00 UTC, whichever hour has most excess flow.
    expect(mail?.text).toContain(`/plants/${scene.plantId}/hours/2026-07-24T19:00:00Z`);
    expect(mail?.headers['List-Unsubscribe']).toMatch(/^<https:\/\/slackwater\.example\/a\/[\w-]{44}\/stop-mail>$/);
    expect(mail?.headers['List-Unsubscribe-Post']).toBe('List-Unsubscribe=One-Click');
  });

  it('counts 23 hours of the day when clocks go forward, and 25 when they go back', async () => {
    await scene.person('operator');
    for (const [day, hours] of [
      ['2026-03-08', 23],
      ['2026-11-01', 25],
    ] as const) {
      const intervals = await scene.storeDay(day, (hour) => (hour < 4 ? -100 : 80));
      expect(intervals).toHaveLength(hours * 12);
      await evaluate(day);
      const text = oneLine(service.sent.at(-1)?.text ?? '');
      // From midnight to 04:00 by the clock: 3 hours in spring, 5 in autumn.
      const back = hours === 23 ? 3 : 5;
      expect(text).toContain(`ran backwards for ${back} h on`);
      expect(text).toContain('00:00 - 04:00 -100 gpm');
      expect(text).toContain(`Low delta-T hours ${back} of ${hours}`);
    }
  });

  it('names both runs of the hour that clocks repeat', async () => {
    await scene.person('operator');
    // The second 01:00 of 1 November 2026 in New York is 06:00 UTC.
    const second = Date.parse('2026-11-01T06:00:00Z');
    await scene.storeDay('2026-11-01', (_hour, _minute, startMs) =>
      startMs >= second && startMs < second + 45 * 60_000 ? -100 : 80,
    );
    await evaluate('2026-11-01');
    expect(oneLine(service.sent[0]?.text ?? '')).toContain('01:00 (second) - 01:45 (second)');
  });

  it('keeps to the plant’s own day in a zone of half hours', async () => {
    scene = await AlertScene.create(owner, 'Asia/Kolkata');
    await scene.person('operator');
    await scene.storeDay(DAY, (hour) => (hour < 2 || hour >= 23 ? -150 : 80));
    await evaluate();
    const text = oneLine(service.sent[0]?.text ?? '');
    expect(text).toContain('00:00 - 02:00 -150 gpm');
    expect(text).toContain('23:00 - 00:00 -150 gpm');
    expect(text).toContain('Low delta-T hours 3 of 24');
  });
});

describe('a day that calls for no mail', () => {
  it('without any data says so', async () => {
    await scene.person('operator');
    await evaluate();
    expect(await scene.outcome(DAY)).toMatchObject({ outcome: 'no-data' });
    expect(service.sent).toEqual([]);
  });

  it('below the rule’s minutes says how long it ran backwards', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, (hour, minute) => (hour === 3 && minute < 25 ? -100 : 80));
    await evaluate();
    expect(await scene.outcome(DAY)).toEqual({
      outcome: 'nothing-to-report',
      detail: 'It ran backwards 25 min; the rule asks for 30 min or more.',
    });
  });

  it('at the rule’s minutes to the interval is mailed', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, (hour, minute) => (hour === 3 && minute < 30 ? -100 : 80));
    await evaluate();
    expect(service.sent).toHaveLength(1);
  });

  it('below the rule’s flow says the most that came back', async () => {
    await scene.person('operator');
    await owner.query(`update alert_rule set min_reverse_flow_gpm = 1000 where plant_id = $1`, [scene.plantId]);
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    expect(await scene.outcome(DAY)).toEqual({
      outcome: 'nothing-to-report',
      detail: 'At most 966 gpm came back; the rule asks for 1000 gpm or more.',
    });
  });

  it('under a rule that is switched off says so', async () => {
    await scene.person('operator');
    await owner.query(`update alert_rule set enabled = false where plant_id = $1`, [scene.plantId]);
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    expect((await scene.outcome(DAY)).outcome).toBe('disabled');
    expect(service.sent).toEqual([]);
  });
});

describe('sending once', () => {
  it('a second evaluation of the day sends nothing more, to new operators neither', async () => {
    const first = await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    await evaluate();
    await scene.person('operator');
    await evaluate();
    expect(service.to()).toEqual([first.email]);
    expect(service.keys).toHaveLength(1);
    expect((await scene.outcome(DAY)).outcome).toBe('already-sent');
  });

  it('a crash after the service took the mail, before it was written down, does not mail twice', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    const dying: MailSender = {
      async send(mail, signal) {
        await service.sender.send(mail, signal);
        throw new Error('the process ends here');
      },
    };
    await expect(evaluate(DAY, { mail: dying })).rejects.toThrow('the process ends here');
    expect((await scene.deliveries()).map((each) => each.status)).toEqual(['pending']);
    await evaluate();
    expect(service.keys).toHaveLength(2);
    expect(new Set(service.keys).size).toBe(1);
    expect(service.sent).toHaveLength(1);
    expect((await scene.deliveries()).map((each) => each.status)).toEqual(['sent']);
  });

  it('nor when the figures were worked out again in between', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    const dying: MailSender = {
      async send(mail, signal) {
        await service.sender.send(mail, signal);
        throw new Error('the process ends here');
      },
    };
    await expect(evaluate(DAY, { mail: dying })).rejects.toThrow();
    await owner.query(`update plant_day set low_hours = 9 where plant_id = $1`, [scene.plantId]);
    await evaluate();
    expect(service.sent).toHaveLength(1);
    expect((await scene.outcome(DAY)).outcome).toBe('sent');
  });

  it('two evaluations at once mail each operator once', async () => {
    const operators = [await scene.person('operator'), await scene.person('operator')];
    await scene.storeDay(DAY, afternoon);
    const run = await scene.run(DAY);
    await Promise.all([evaluateAlert(run, deps()), evaluateAlert(run, deps())]);
    expect(service.to()).toEqual(operators.map((each) => each.email).sort());
  });

  it('a plant’s other day is another mail', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    await scene.storeDay('2026-07-25', afternoon);
    await evaluate();
    await evaluate('2026-07-25');
    expect(service.sent.map((mail) => /Fri 24|Sat 25/.exec(mail.subject)?.[0])).toEqual(['Fri 24', 'Sat 25']);
  });
});

describe('when the mail service fails', () => {
  it('an answer of 5xx throws, so that the job tries again, and then only for those still waiting', async () => {
    const [first, second] = [await scene.person('operator'), await scene.person('operator')];
    await scene.storeDay(DAY, afternoon);
    service.refuse = (mail) => (mail.to.includes(first.email) ? { status: 503, name: 'internal_server_error' } : null);
    await expect(evaluate()).rejects.toThrow(MailUnavailable);
    expect(service.to()).toEqual([second.email]);
    expect(await scene.outcome(DAY)).toMatchObject({ outcome: 'pending' });
    service.refuse = () => null;
    await evaluate();
    expect(service.to()).toEqual([first.email, second.email].sort());
    expect(service.sent).toHaveLength(2);
    expect((await scene.outcome(DAY)).outcome).toBe('sent');
  });

  it('an answer of 4xx is written down in words and does not throw', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    service.refuse = () => ({ status: 422, name: 'validation_error', message: 'Invalid `to` field.' });
    await evaluate();
    expect(await scene.deliveries()).toMatchObject([
      { status: 'failed', failure: 'The mail service refused the mail (422): Invalid `to` field.' },
    ]);
    expect(await scene.outcome(DAY)).toEqual({
      outcome: 'failed',
      detail: 'Ran backwards 7 h; refused for 1 operator.',
    });
  });

  it('who was refused is sent to when the day is run again', async () => {
    const { email } = await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    service.refuse = () => ({ status: 403, name: 'invalid_api_key' });
    await evaluate();
    service.refuse = () => null;
    await evaluate();
    expect(service.to()).toEqual([email]);
    expect(await scene.deliveries()).toMatchObject([{ status: 'sent', failure: null }]);
  });
});

describe('while a mail is on its way', () => {
  it('no transaction is held', async () => {
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    const open: number[] = [];
    const watching: MailSender = {
      async send() {
        const { rows } = await owner.query<{ open: number }>(
          `select count(*)::int as open from pg_stat_activity
           where datname = current_database() and usename = 'slackwater_worker' and xact_start is not null`,
        );
        open.push(rows[0]?.open ?? -1);
        return { kind: 'sent', providerId: 'mail-1' };
      },
    };
    await evaluate(DAY, { mail: watching });
    expect(open).toEqual([0]);
  });

  it('the job’s signal stops it before the next one', async () => {
    await scene.person('operator');
    await scene.person('operator');
    await scene.storeDay(DAY, afternoon);
    const control = new AbortController();
    const stopping: MailSender = {
      send(mail) {
        control.abort(new Error('taken by another worker'));
        return service.sender.send(mail);
      },
    };
    await expect(evaluate(DAY, { mail: stopping, signal: control.signal })).rejects.toThrow('taken by another worker');
    expect(service.sent).toHaveLength(1);
    expect((await scene.deliveries()).map((each) => each.status).sort()).toEqual(['pending', 'sent']);
  });
});
