import {
  Body,
  Button,
  Column,
  Container,
  Head,
  Heading,
  Html,
  Link,
  Preview,
  Row,
  Text,
} from '@react-email/components';
import type { CSSProperties, ReactNode } from 'react';
import { formatClock, formatDayYear } from '../client/format-time';
import type { DailyMailModel } from './daily-mail-model';
import { Facts, Stretches } from './daily-mail-tables';
import { DARK_SHEET, LIGHT, SANS } from './inks';
import {
  againstProduction,
  cautionWords,
  clockWords,
  dayWords,
  headline,
  preheaderOf,
  ruleWords,
  situationWords,
  subjectOf,
} from './sentences';
import { Strip } from './strip';
import { base, ink, ink2, serif, small } from './styles';

/** The morning mail: a 520 px column of tables with inline styles and no images; without style sheets the order still reads. */
export function DailyMailHtml({ model }: { model: DailyMailModel }) {
  const situation = situationWords(model);
  const against = againstProduction(model);
  return (
    <Html lang="en">
      <Head>
        <meta name="viewport" content="width=device-width" />
        <meta name="color-scheme" content="light dark" />
        <meta name="supported-color-schemes" content="light dark" />
        <title>{subjectOf(model)}</title>
        <style>{DARK_SHEET}</style>
      </Head>
      <Preview>{preheaderOf(model)}</Preview>
      <Body className="paper" style={{ ...base, backgroundColor: LIGHT.paper, padding: '14px 16px 30px' }}>
        <Container style={{ maxWidth: 520, width: '100%' }}>
          <Masthead model={model} />
          <Answer model={model} />
          <Text className="ink" style={{ ...base, ...ink, fontSize: 14, lineHeight: '19px', margin: '26px 0 14px' }}>
            <span className="ink2" style={ink2}>
              Bypass flow by hour, {dayWords(model)}.
            </span>{' '}
            Above the line: surplus. Below, marked /: return water coming back.
            {model.hours.some((hour) => hour.kind === 'unknown') ? ' Broken outline: not known.' : ''}
          </Text>
          <Strip hours={model.hours} timeZone={model.timeZone} />
          <Stretches model={model} />
          <Facts model={model} />
          <Text className="ink" style={{ ...base, ...ink, fontSize: 15, lineHeight: '22px', margin: '14px 0 0' }}>
            {against === null ? '' : `${against} `}
            {situation === null ? '' : `${situation} `}
            {model.links.worstHour === null || model.worstHourMs === null ? null : (
              <MailLink href={model.links.worstHour}>
                Open {clockWords(model.worstHourMs, model.timeZone)}, the worst hour
              </MailLink>
            )}
          </Text>
          <Button
            href={model.links.acknowledgeWithNote}
            className="ink line"
            style={{
              ...button,
              ...ink,
              marginTop: 20,
              border: `1px solid ${LIGHT.ink}`,
              padding: '12px 16px',
              fontSize: 15,
            }}
          >
            Acknowledge with a note
          </Button>
          <Text className="ink2" style={{ ...small, margin: '22px 0 0' }}>
            {cautionWords(model)}
          </Text>
          <Text className="ink2" style={{ ...small, margin: '14px 0 0' }}>
            {ruleWords(model)} <MailLink href={model.links.stop}>Stop these mails</MailLink>
          </Text>
        </Container>
      </Body>
    </Html>
  );
}

const button: CSSProperties = {
  display: 'block',
  boxSizing: 'border-box',
  width: '100%',
  textAlign: 'center',
  fontFamily: SANS,
  borderRadius: 2,
};

function Masthead({ model }: { model: DailyMailModel }) {
  const { evaluatedAtMs, timeZone } = model;
  return (
    <Row className="line" style={{ borderBottom: `1px solid ${LIGHT.ink}`, marginBottom: 20 }}>
      <Column className="ink" style={{ ...serif, fontSize: 20, lineHeight: '36px' }}>
        Slackwater
      </Column>
      <Column className="ink2" align="right" style={{ ...base, ...ink2, fontSize: 13 }}>
        {formatDayYear(evaluatedAtMs, timeZone)}, {formatClock(evaluatedAtMs, timeZone)}
      </Column>
    </Row>
  );
}

function Answer({ model }: { model: DailyMailModel }) {
  const { ran, reached } = headline(model);
  return (
    <>
      <Text className="ink2" style={{ ...base, ...ink2, fontSize: 14, lineHeight: '19px' }}>
        {model.plantName}, {model.organizationName}
      </Text>
      <Heading as="h1" className="ink" style={{ ...serif, margin: '5px 0 17px', fontSize: 26, lineHeight: '31px' }}>
        {ran} {reached}
      </Heading>
      <Button
        href={model.links.acknowledge}
        className="filled"
        style={{
          ...button,
          backgroundColor: LIGHT.ink,
          border: `1px solid ${LIGHT.ink}`,
          color: LIGHT.paper,
          padding: '14px 16px',
          fontSize: 17,
          fontWeight: 600,
        }}
      >
        Acknowledge
      </Button>
    </>
  );
}

function MailLink({ href, children }: { href: string; children: ReactNode }) {
  return (
    <Link href={href} className="ink" style={{ ...ink, textDecoration: 'underline', textDecorationLine: 'underline' }}>
      {children}
    </Link>
  );
}
