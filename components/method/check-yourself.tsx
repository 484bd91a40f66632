import { Command, Head, P, Part } from './parts';

/** How a sceptical reader gets at the numbers and at what made them. */
export function CheckYourself() {
  return (
    <Part id="check" number={9} title="How to check it yourself" sub="nothing needs to be taken on trust">
      <Head>The intervals</Head>
      <P>
        <Command>{'GET /api/v1/plants/{plant}/intervals?from=…&to=…&format=csv'}</Command> gives a row an interval: the
        direction with its probability, the bypass and the blended supply with both ends of their intervals, the
        reconciled flows and temperatures, state and reason. A signed-in browser may open it; a script sends a token
        with scope read. <Command>/api/v1/openapi.json</Command> describes every column. Put your own trend beside it.
      </P>
      <Head>One hour</Head>
      <P>
        The page of an hour shows measured beside reconciled at every station, the chi-square, the measurement most at
        odds and what the calibration corrected.
      </P>
      <Head>What made a result</Head>
      <P>
        Each stored day of results names its <b>settings revision</b>, <b>calibration</b> and <b>kernel version</b>; so
        does the answer for an hour, and the foot of the plant’s pages. A result is a function of the samples of its day
        and the days beside it, and of those three: the same inputs give the same numbers.
      </P>
      <Head>The sensors</Head>
      <P>
        The Sensors page of a plant has the likely error of each with its interval, what tied it and over how many
        hours. Read a reference thermometer at one tee, enter it as a spot check, and see whether the answer moves
        within its interval.
      </P>
      <Head>The code</Head>
      <P>
        The estimator is the folder <Command>lib/hydronics</Command>: pure functions without any dependency on the rest.
        <Command>DEVELOPERS.md</Command> maps its files. <Command>npx vitest run --project unit</Command> runs its
        tests, those against published values among them.
      </P>
    </Part>
  );
}
