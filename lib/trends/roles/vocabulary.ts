/** What a word in a point's name can say. */
export type Concept =
  | 'chilledWater'
  | 'supply'
  | 'return'
  | 'leaving'
  | 'entering'
  | 'primary'
  | 'secondary'
  | 'bypass'
  | 'temperature'
  | 'flow'
  | 'power'
  | 'energy'
  | 'efficiency'
  | 'tons'
  | 'amps'
  | 'status'
  | 'command'
  | 'speed'
  | 'hertz'
  | 'valve'
  | 'position'
  | 'percent'
  | 'load'
  | 'setpoint'
  | 'pressure'
  | 'differential'
  | 'delta'
  | 'outdoor'
  | 'wetBulb'
  | 'humidity'
  | 'chiller'
  | 'evaporator'
  | 'isolation'
  | 'pump'
  | 'plant'
  | 'condenser'
  | 'hotWater'
  | 'air'
  | 'storage'
  | 'alarm'
  | 'branch'
  | 'quality'
  | 'counter'
  | 'refrigerant'
  | 'limit'
  | 'vane'
  | 'runtime'
  | 'elsewhere';

/**
 * Words with one meaning, as the trade abbreviates them, with the common German, French and Spanish ones. Lower case,
 * without accents (see plainWord); one line a set of meanings.
 */
const LINES: readonly (readonly [concepts: readonly Concept[], words: string])[] = [
  [['chilledWater'], 'chw chilled chwl chwsys chwh kaltwasser glacee eg fria helada enfriada'],
  [['supply'], 'sup supply sply spl suply sups vorlauf vl depart impulsion ida aller'],
  [['return'], 'ret return rtn retn rtrn rueck ruecklauf rucklauf rl retour retorno'],
  [['supply', 'temperature'], 'tvl swt'],
  [['return', 'temperature'], 'trl rwt'],
  [['leaving'], 'lvg leaving lv lvng leav out outlet discharge disch austritt sortie salida'],
  [['entering'], 'ent entering entr in inlet eintritt entree entrada'],
  [['leaving', 'temperature'], 'lwt lvwt lvgt'],
  [['entering', 'temperature'], 'ewt entwt'],
  [['leaving', 'chilledWater', 'temperature'], 'lchwt lcht chwlt chwlwt'],
  [['entering', 'chilledWater', 'temperature'], 'echwt echt chwet chwewt'],
  [['evaporator', 'leaving', 'temperature'], 'evlwt elwt evaplwt'],
  [['evaporator', 'entering', 'temperature'], 'evewt eewt evapewt'],
  [['leaving', 'chilledWater'], 'lchw'],
  [['entering', 'chilledWater'], 'echw'],
  [['primary'], 'pri prim primary prm production prod primar primaer primaire primario prmry'],
  [
    ['secondary'],
    'sec secondary secd scnd dist distribution distrib sl sekundar sekundaer verteiler verbraucher secondaire secundario scndry',
  ],
  [['primary', 'supply'], 'ps'],
  [['primary', 'return'], 'pr'],
  [['secondary', 'return'], 'sr'],
  [['primary', 'supply', 'temperature'], 'tps pst'],
  [['primary', 'return', 'temperature'], 'tpr prt'],
  [['secondary', 'supply', 'temperature'], 'tss sst'],
  [['secondary', 'return', 'temperature'], 'tsr srt'],
  [['bypass', 'temperature'], 'tb tbyp'],
  [['primary', 'flow'], 'fp qp'],
  [['secondary', 'flow'], 'fs qs'],
  [['bypass', 'flow'], 'fb qb'],
  [
    ['bypass'],
    'byp bypass bypas bp bps decoupler decouple decoupling decoup decpl dcpl dcplr common commonpipe cmnpipe weiche uberstromung ueberstroemung uberstrom ueberstroem decouplage decoupleur bouteille desacoplador derivacion',
  ],
  [['bypass', 'valve'], 'bpv bypv bypvlv'],
  [['temperature'], 'temp temperature tmp temps rtd temperatur tempr temperature temperatura'],
  [['flow'], 'flow flo flw fl gpm flowrate flowmeter fm durchfluss volumenstrom lps debit caudal gpmflow'],
  [['power'], 'kw power pwr watts watt demand elec mw leistung puissance potencia wirkleistung'],
  [['energy'], 'kwh mwh energy totalizer totaliser totalized consumption btu btuh mmbtu therms wh gal gallons'],
  [['efficiency'], 'kwton efficiency eff cop eer'],
  [['tons'], 'ton tons tonnage'],
  [['amps'], 'amp amps amperes current'],
  [
    ['status'],
    'status stat sts stts run running runs on onoff proof prf ss state fdbk feedback fb betrieb betriebsmeldung bm etat marche estado marcha',
  ],
  [['command'], 'cmd command enable enabled ena enbl call request req startstop freigabe befehl'],
  [['speed'], 'spd speed vfd vsd vfdspd drehzahl vitesse velocidad'],
  [['hertz', 'speed'], 'hz hertz freq frequency'],
  [['valve'], 'valve vlv vlve ventil vanne valvula klappe'],
  [['position'], 'pos position posn opening stellung ouverture apertura posicion'],
  [['percent'], 'pct percent perc'],
  [['percent', 'load'], 'rla fla'],
  [['load'], 'load ld capacity cap auslastung last charge carga plr'],
  [['setpoint'], 'stpt setpt setpoint spt stp setp sollwert soll consigne consigna tsp target'],
  [['pressure', 'differential'], 'dp dpt diffpress dpress psid differenzdruck'],
  [['differential'], 'diff differential differentielle diferencial'],
  [['pressure'], 'press pressure psi psig prs druck pression presion'],
  [['delta'], 'deltat delta'],
  [
    ['outdoor'],
    'oa outdoor outside outdr osa oda ambient amb weather oau aussen aussenluft exterieur exterieure exterior',
  ],
  [['outdoor', 'temperature'], 'oat oata osat odt oadb oadbt odb aussentemperatur'],
  [['outdoor', 'wetBulb', 'temperature'], 'oawb oawbt owb'],
  [['wetBulb', 'temperature'], 'wb wbt wetbulb wet feuchtkugel humide'],
  [['humidity'], 'rh humidity hum humid enthalpy dewpoint oah oarh'],
  [
    ['chiller'],
    'ch chiller chlr chillr chr chl chil chllr wcc kaltemaschine kaeltemaschine km groupe gf refroidisseur enfriadora enf',
  ],
  [['evaporator'], 'evap evaporator evp verdampfer evaporateur evaporador'],
  [['isolation', 'valve'], 'iso isolation isov isovlv'],
  [['pump'], 'pump pmp pmps pumps pu pumpe pompe bomba'],
  [['chilledWater', 'pump'], 'chwp'],
  [['primary', 'pump'], 'pp pchp ppmp pchwp'],
  [['secondary', 'pump'], 'schp spmp schwp'],
  [
    ['plant'],
    'plant plt planta total tot cup cep site facility chplt chplant kaltezentrale kaeltezentrale anlage centrale central gesamt',
  ],
  [
    ['condenser'],
    'cond condenser cw cws cwr cwst cwrt cdw cdws cdwr cdwst cdwrt cwp cdwp tower ct ctf fan lcwt ecwt lcdwt ecdwt cdlwt cdewt cnd cond condensing kuhlturm kuehlturm ruckkuhlwerk rueckkuehlwerk ruckkuhler rueckkuehler ruckkuhlung kuhlwasser kuehlwasser kondensator verflussiger condenseur tour condensador torre',
  ],
  [
    ['hotWater'],
    'hw hws hwr hwst hwrt hhw hhws hhwr hhwst hhwrt hot heating boiler blr hx hchw heizung warmwasser heizwasser kessel chaude chauffage chaudiere caliente caldera calefaccion domestic dhw dcw dhws dhwr potable trinkwasser',
  ],
  [['air'], 'air sat mat rat dat lat cclat eat room zone space supair luft zuluft raum ambiance sala'],
  [['storage'], 'tes tank ice storage ts'],
  [['alarm'], 'alarm alm flt trip fault storung stoerung alarme defaut alarma'],
  [['branch'], 'ahu bldg building coil branch fcu riser wing block crah gebaude gebaeude'],
  [['quality'], 'quality qual flag flags reliability note notes comment comments'],
  [
    ['refrigerant'],
    'refrigerant refrig rfg oil bearing suction approach superheat subcool subcooling saturated satur satd winding compressor comp motor crkt circuit',
  ],
  [['limit'], 'limit lim lmt'],
  [['vane'], 'vane vanes igv pgv guide'],
  [['runtime'], 'hours hrs runtime starts runhours betriebsstunden heures horas'],
  [
    ['elsewhere'],
    'vav damper dmp dmpr duct lighting lights light exhaust exh rtu mau doas co2 filter steam elevator generator genset ups occupancy occ sump sewage makeup mkup',
  ],
  [['counter'], 'id index no row seq record recno'],
];

const WORDS = new Map<string, readonly Concept[]>(
  LINES.flatMap(([concepts, words]) => words.split(' ').map((word) => [word, concepts] as const)),
);

/** Small letters without accents, as words stand in the vocabulary: `Rücklauf` is `rucklauf`. */
export const plainWord = (piece: string): string =>
  piece
    .toLowerCase()
    .replaceAll('ß', 'ss')
    .normalize('NFD')
    .replace(/\p{Mn}/gu, '');

/** Names of chilled water run together: a side, `chw`, a direction and a quantity, such as `pchwst` or `schwr`. */
const CHILLED = /^(t)?(p|pri|prim|s|sec)?chw(s|r|sup|ret|rtn)?(tsp|sp|stpt|t|temp|tmp|f|fl|flow|gpm|p|pmp|dp|dt)?$/;
const SIDES: Readonly<Record<string, Concept>> = {
  p: 'primary',
  pri: 'primary',
  prim: 'primary',
  s: 'secondary',
  sec: 'secondary',
};
const QUANTITIES: Readonly<Record<string, readonly Concept[]>> = {
  t: ['temperature'],
  temp: ['temperature'],
  tmp: ['temperature'],
  f: ['flow'],
  fl: ['flow'],
  flow: ['flow'],
  gpm: ['flow'],
  p: ['pump'],
  pmp: ['pump'],
  sp: ['setpoint', 'temperature'],
  tsp: ['setpoint', 'temperature'],
  stpt: ['setpoint', 'temperature'],
  dp: ['differential', 'pressure'],
  dt: ['delta'],
};
/** `chwsp` reads as a supply pump too, but is the set-point of the supply nearly everywhere. */
const CHILLED_SETPOINT = /^(p|s)?chwsp$/;

const known = new Map<string, readonly Concept[]>();

/** What a plain word of two letters or more says; empty when it is not in the vocabulary. */
export function conceptsOfWord(word: string): readonly Concept[] {
  const before = known.get(word);
  if (before) return before;
  const concepts = WORDS.get(word) ?? chilledConcepts(word) ?? compoundConcepts(word);
  // Serial numbers and the like would fill the memory of a process that lives long.
  if (known.size > MOST_REMEMBERED) known.clear();
  known.set(word, concepts);
  return concepts;
}

const MOST_REMEMBERED = 5000;

function chilledConcepts(word: string): readonly Concept[] | null {
  if (CHILLED_SETPOINT.test(word))
    return ['chilledWater', 'supply', 'setpoint', 'temperature', ...(word[0] === 'c' ? [] : [SIDES[word[0]!]!])];
  const chilled = CHILLED.exec(word);
  if (!chilled) return null;
  const [, temperature, side, direction, quantity] = chilled;
  return [
    'chilledWater',
    ...(side ? [SIDES[side]!] : []),
    ...(direction ? [direction.startsWith('s') ? ('supply' as const) : ('return' as const)] : []),
    ...(quantity ? QUANTITIES[quantity]! : []),
    ...(temperature ? (['temperature'] as const) : []),
  ];
}

/** Shorter parts are found in too many words by chance. */
const SHORTEST_PART = 4;
/** Parts that are short but clear within a run-together word. */
const SHORT_PARTS = new Set([
  'chw',
  'sup',
  'ret',
  'rtn',
  'pri',
  'sec',
  'tmp',
  'spd',
  'kw',
  'pos',
  'ahu',
  'lwt',
  'ewt',
  'pct',
]);
/** Signs of a compound, and words that say nothing of themselves but stand between others. */
const FILLERS = ['water', 'sensor', 'wasser', 'kalte', 'kaelte', 's', 'n'];

/** A word run together of others, as in German or by people who use no signs: every letter must belong to a part. */
function compoundConcepts(word: string): readonly Concept[] {
  if (word.length < 6 || word.length > 48) return [];
  const from = new Array<readonly Concept[] | null>(word.length + 1).fill(null);
  from[word.length] = [];
  for (let start = word.length - 1; start >= 0; start--) {
    for (let end = word.length; end > start && from[start] === null; end--) {
      const rest = from[end];
      if (!rest) continue;
      const part = word.slice(start, end);
      if (part === word) continue;
      if (FILLERS.includes(part) && start > 0) from[start] = rest;
      else if (part.length >= SHORTEST_PART || SHORT_PARTS.has(part)) {
        const says = WORDS.get(part) ?? (part.includes('chw') ? chilledConcepts(part) : null);
        if (says) from[start] = [...says, ...rest];
        else if (FILLERS.includes(part)) from[start] = rest;
      }
    }
  }
  return from[0] ?? [];
}
