import { Section } from '@/components/ui/section';
import type { DevMail } from '@/lib/mail/dev-mail-store';
import { cameAt } from './came-at';

/**
 * One mail: as html, as text, and its headers. The html runs in a frame that may do nothing but follow links into a tab of
 * their own; the page's nonce lets the mail's style sheet through the policy that the frame inherits.
 */
export function OpenMail({ mail, nonce }: { mail: DevMail; nonce: string | undefined }) {
  const html = nonce === undefined ? mail.html : mail.html.replaceAll('<style>', `<style nonce="${nonce}">`);
  const lines: [string, string][] = [
    ['From', mail.from],
    ['To', mail.to.join(', ')],
    ['Date', cameAt(mail)],
    ...Object.entries(mail.headers),
  ];
  return (
    <article aria-labelledby="subject" className="min-w-0">
      <h2 id="subject" className="mb-2.5 border-t border-ink pt-2.5 text-figureL font-semibold">
        {mail.subject}
      </h2>
      <dl className="mb-5 grid grid-cols-[auto_minmax(0,1fr)] gap-x-4 gap-y-0.5 text-small">
        {lines.map(([name, value]) => (
          <div key={name} className="contents">
            <dt className="text-ink-2">{name}</dt>
            <dd className="break-words">{value}</dd>
          </div>
        ))}
      </dl>
      {mail.html === '' ? null : (
        <iframe
          title={`The mail: ${mail.subject}`}
          srcDoc={html}
          sandbox="allow-popups allow-popups-to-escape-sandbox"
          className="mb-7 h-[1180px] w-full phone:h-[1400px] border border-rule"
        />
      )}
      {mail.text === '' ? null : (
        <Section title="As text">
          <pre className="overflow-x-auto whitespace-pre-wrap break-words text-small">{mail.text}</pre>
        </Section>
      )}
    </article>
  );
}
