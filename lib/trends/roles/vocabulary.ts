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
  | 'counter';

/** Words with one meaning, as the trade abbreviates them. Lower case; one line a set of meanings. */
const LINES: readonly (readonly [concepts: readonly Concept[], words: string])[] = [
  [['chilledWater'], 'chw chilled chwl chwsys chwh'],
  [['supply'], 'sup supply sply spl suply sups vorlauf vl'],
  [['return'], 'ret return rtn retn rtrn rueck ruecklauf rl'],
  [['leaving'], 'lvg leaving lv lvng leav out outlet discharge disch'],
  [['entering'], 'ent entering entr in inlet'],
  [['leaving', 'temperature'], 'lwt lvwt'],
  [['entering', 'temperature'], 'ewt entwt'],
  [['leaving', 'chilledWater', 'temperature'], 'lchwt lcht'],
  [['entering', 'chilledWater', 'temperature'], 'echwt echt'],
  [['leaving', 'chilledWater'], 'lchw'],
  [['entering', 'chilledWater'], 'echw'],
  [['primary'], 'pri prim primary prm production prod primär primaer'],
  [['secondary'], 'sec secondary secd scnd dist distribution distrib sl sekundär sekundaer'],
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
    'byp bypass bypas bp bps decoupler decouple decoupling decoup decpl dcpl dcplr common commonpipe cmnpipe',
  ],
  [['bypass', 'valve'], 'bpv bypv bypvlv'],
  [['temperature'], 'temp temperature tmp temps rtd temperatur tempr'],
  [['flow'], 'flow flo flw fl gpm flowrate flowmeter fm durchfluss lps'],
  [['power'], 'kw power pwr watts watt demand elec mw'],
  [['energy'], 'kwh mwh energy totalizer totaliser totalized consumption btu btuh mmbtu therms wh gal gallons'],
  [['efficiency'], 'kwton efficiency eff cop eer'],
  [['tons'], 'ton tons tonnage'],
  [['amps'], 'amp amps amperes current'],
  [['status'], 'status stat sts stts run running runs on onoff proof prf ss state fdbk feedback fb'],
  [['command'], 'cmd command enable enabled ena enbl call request req startstop'],
  [['speed'], 'spd speed vfd vsd vfdspd drehzahl'],
  [['hertz', 'speed'], 'hz hertz freq frequency'],
  [['valve'], 'valve vlv vlve'],
  [['position'], 'pos position posn opening'],
  [['percent'], 'pct percent perc'],
  [['percent', 'load'], 'rla fla'],
  [['load'], 'load ld'],
  [['setpoint'], 'stpt setpt setpoint spt stp setp'],
  [['pressure', 'differential'], 'dp dpt diffpress dpress psid'],
  [['differential'], 'diff differential'],
  [['pressure'], 'press pressure psi psig prs druck'],
  [['delta'], 'deltat delta'],
  [['outdoor'], 'oa outdoor outside outdr osa oda ambient amb weather oau'],
  [['outdoor', 'temperature'], 'oat oata osat odt oadb oadbt odb'],
  [['outdoor', 'wetBulb', 'temperature'], 'oawb oawbt owb'],
  [['wetBulb', 'temperature'], 'wb wbt wetbulb wet'],
  [['humidity'], 'rh humidity hum humid enthalpy dewpoint oah oarh'],
  [['chiller'], 'ch chiller chlr chillr chr chl chil'],
  [['evaporator'], 'evap evaporator evp'],
  [['isolation', 'valve'], 'iso isolation isov isovlv'],
  [['pump'], 'pump pmp pmps pumps pu'],
  [['chilledWater', 'pump'], 'chwp'],
  [['primary', 'pump'], 'pp pchp ppmp pchwp'],
  [['secondary', 'pump'], 'schp spmp schwp'],
  [['plant'], 'plant total tot cup cep site facility'],
  [
    ['condenser'],
    'cond condenser cw cws cwr cwst cwrt cdw cdws cdwr cdwst cdwrt cwp cdwp tower ct ctf fan lcwt ecwt lcdwt ecdwt',
  ],
  [['hotWater'], 'hw hws hwr hwst hwrt hhw hhws hhwr hhwst hhwrt hot heating boiler blr hx'],
  [['air'], 'air sat mat rat dat room zone space supair'],
  [['storage'], 'tes tank ice storage ts'],
  [['alarm'], 'alarm alm flt trip'],
  [['branch'], 'ahu bldg building coil branch fcu riser wing block'],
  [['quality'], 'quality qual flag flags reliability note notes comment comments'],
  [['counter'], 'id index no row seq record recno'],
];

const WORDS = new Map<string, readonly Concept[]>(
  LINES.flatMap(([concepts, words]) => words.split(' ').map((word) => [word, concepts] as const)),
);

/** Names of chilled water run together: a side, `chw`, a direction and a quantity, such as `pchwst` or `schwr`. */
const CHILLED = /^(p|pri|prim|s|sec)?chw(s|r)?(t|temp|f|fl|flow|p|pmp|sp|stpt|dp|dt)?$/;
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
  f: ['flow'],
  fl: ['flow'],
  flow: ['flow'],
  p: ['pump'],
  pmp: ['pump'],
  sp: ['setpoint', 'temperature'],
  stpt: ['setpoint', 'temperature'],
  dp: ['differential', 'pressure'],
  dt: ['delta'],
};

/** What a lower-case word of two letters or more says; empty when it is not in the vocabulary. */
export function conceptsOfWord(word: string): readonly Concept[] {
  const known = WORDS.get(word);
  if (known) return known;
  const chilled = CHILLED.exec(word);
  if (!chilled) return [];
  const [, side, direction, quantity] = chilled;
  return [
    'chilledWater',
    ...(side ? [SIDES[side]!] : []),
    ...(direction ? [direction === 's' ? ('supply' as const) : ('return' as const)] : []),
    ...(quantity ? QUANTITIES[quantity]! : []),
  ];
}
