import type { Channel, Kind, Unit } from '../../units/channels.ts';

/**
 * The words that headings use, by what they mean, in English, German, French, Spanish, Italian and Dutch, without
 * accents. Stems of four letters and more match the beginning of a word; shorter ones the whole word. No names of
 * makers or products: a heading is understood by its words or asked about.
 */
type Concept =
  | Channel
  | 'tank'
  | 'top'
  | 'middle'
  | 'bottom'
  | 'temperature'
  | 'power'
  | 'energy'
  | 'total'
  | 'daily'
  | 'mean'
  | 'start'
  | 'end'
  | 'instant'
  | 'utc'
  | 'local'
  | 'time'
  | 'load'
  | 'other'
  | 'second'
  | 'discharge'
  | 'charge'
  | 'outside'
  | 'valve'
  | 'water';

const WORDS: Record<Concept, string> = {
  export:
    'export exported exports feedin einspeis eingespeis netzeinspeis rucklieferung rueckspeis injection injecte reinjection exporta exportad vertid excedent immission immess ceduta esporta teruglever teruggelever invoeding tothegrid',
  import:
    'import imported imports bezug netzbezug bezogen soutirage soutire achat importa importad prelievo prelevat importazione afname afgenomen purchased fromgrid fromthegrid',
  grid: 'grid mains netz netzleistung netzaustausch reseau red rete net netaansluiting exchange saldo',
  generation:
    'generation generated pv solar erzeug ertrag produktion photovolta fotovolta production produzione produccion generacion generazione opwek opgewek productie inverter wechselrichter yield panels solaire zon zonne zonnepanel onduleur inversor zonnestroom',
  diversion:
    'diversion diverted diverter divert heater immersion heizstab heizpatrone heizelement einschraubheiz thermoplongeur resistance resistencia resistenza resistentie desviad derivac derivad deviat deviazione dompelaar verwarmingselement element umgeleitet uberschussheiz',
  diversion2: '',
  tankTop: '',
  tankMiddle: '',
  tankBottom: '',
  relay:
    'relay relais rele relee relais contact kontakt contatto contacto anforderung freigabe boilercall heatcall callforheat',
  gas: 'gas gaz erdgas gasmeter gaszahler gasverbrauch aardgas gasverbruik metano',
  coldFeed: 'coldfeed cold kaltwasser kalt froide froid fria fredda koud inlet coldwater',
  ambient:
    'ambient cupboard room umgebung raum raumtemperatur ambiante ambiente piece habitacion stanza locale omgeving kamer kast airing indoor innen',
  battery: 'battery batterie batterij bateria batteria accu akku',
  charger: 'charger ev wallbox ladestation ladepunkt vehicle laadpaal laadpunt borne carcharg evcharg',
  tank: 'tank cylinder store speicher puffer boiler ballon deposito acumulador termo serbatoio accumulo bollitore vat buffervat dhw warmwasser hotwater brauchwasser cumulus ecs acs chauffeeau',
  top: 'top upper oben oberer haut superieur superior arriba alto alta superiore boven bovenin',
  middle: 'middle mid centre center mitte mittig milieu medio central centro mezzo midden',
  bottom: 'bottom lower unten unterer bas inferieur inferior abajo basso bassa inferiore onder onderin base',
  temperature: 'temp temperatur temperature temperatura temperatuur celsius fahrenheit degc degf',
  power: 'power leistung puissance potencia potenza vermogen watt watts',
  energy: 'energy energie energia arbeit nrj',
  total:
    'total totals cumulative cumul counter count register reading meter zahler zaehler zahlerstand stand index indice compteur contador lectura contatore lettura teller meterstand lifetime gesamt acumulad totale totalizer',
  daily: 'daily today tages heute journalier jour diario hoy giornaliero oggi dagelijks vandaag',
  mean: 'mean average avg mittel mittelwert durchschnitt moyenne moyen media medio promedio gemiddeld',
  start: 'start starting begin beginning beginn from von debut inicio desde inizio da vanaf since',
  end: 'end ending ended ende until bis fin hasta fine fino einde tot',
  instant: '',
  utc: 'utc gmt zulu',
  local: 'local lokal ortszeit locale lokaal',
  time: 'time timestamp date datetime datum uhrzeit zeit zeitpunkt zeitstempel heure horodate horodatage fecha hora data ora tijd tijdstip when epoch unix day tag jour dia giorno dag clock stamp',
  load: 'consumption consumed load usage used house home household demand verbrauch haus haushalt eigenverbrauch consommation maison consumo casa carico hogar verbruik huis huishouden selfuse selfconsumption autoconsum',
  other:
    'voltage volt spannung tension voltaje tensione spanning current strom amps ampere frequency frequenz humidity feuchte pressure druck pressione factor reactive apparent soc price cost preis prix precio prezzo prijs tariff id serial index status quality flag rssi uptime wind irradiance radiation rain cloud phase angle estimated',
  second: '2 ii two second zweite zweiter deuxieme segundo secondo tweede',
  discharge: 'discharge discharging entlad decharge descarga scarica ontlad',
  charge: 'charge charging ladung laden geladen recharge carga carica lading',
  outside: 'outside outdoor aussen ausen exterieur exterior esterno esterna buiten weather',
  valve: 'valve ventil vanne valvula valvola klep',
  water: 'water wasser eau agua acqua dhw hotwater',
};

const INDEX = Object.entries(WORDS).map(([concept, words]) => ({
  concept: concept as Concept,
  stems: words.split(' ').filter((word) => word !== ''),
}));

const UNIT_FORMS: [RegExp, Unit][] = [
  [/^k\.?w\.?h$/i, 'kWh'],
  [/^MWh$/, 'MWh'],
  [/^mwh$/, 'MWh'],
  [/^w\.?h$/i, 'Wh'],
  [/^k\.?w$/i, 'kW'],
  [/^w(?:att)?s?$/i, 'W'],
  [/^mj$/i, 'MJ'],
  [/^(?:m3|m³|m\^3|cbm|cum|nm3|nm³)$/i, 'm3'],
  [/^(?:l|ltr|litres?|liters?|liter)$/i, 'litre'],
  [/^(?:ft3|ft³|cf|cuft)$/i, 'ft3'],
  [/^(?:hcf|ccf|100ft3)$/i, 'ft3x100'],
  [/^(?:°\s?c|ºc|℃|degc|celsius|c)$/i, 'C'],
  [/^(?:°\s?f|ºf|℉|degf|fahrenheit|f)$/i, 'F'],
];
/** Units of quantities that there is no channel for. */
const FOREIGN_UNIT =
  /^(?:v|a|ma|hz|%|va|kva|var|kvar|kvarh|bar|pa|hpa|kpa|ppm|rh|€|£|\$|eur|gbp|usd|p|ct|cent|lux|w\/m2|w\/m²|m\/s|mm|min|s|ms|h|l\/min|l\/h)$/i;

/** Text as words: camel case, underscores and punctuation cut, accents taken off. */
export function wordsOf(text: string): string[] {
  return text
    .replace(/([\p{Ll}\d])(\p{Lu}\p{Ll})/gu, '$1 $2')
    .replace(/ß/g, 'ss')
    .normalize('NFD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .split(/[^\p{L}\p{N}]+/u)
    .filter((word) => word !== '');
}

function means(word: string, stem: string): boolean {
  return word === stem || (stem.length >= 4 && word.startsWith(stem));
}

/** What a heading says. */
export interface HeadingWords {
  has(concept: Concept): boolean;
  unit: Unit | null;
  /** A unit of a quantity that there is no channel for. */
  foreign: string | null;
  words: string[];
}

/** The unit that a text is, null if it is none that channels use. */
export function unitOf(text: string): Unit | null {
  const trimmed = text
    .trim()
    .replace(/^[([{<]|[)\]}>]$/g, '')
    .trim();
  return UNIT_FORMS.find(([form]) => form.test(trimmed))?.[1] ?? null;
}

/** Whether a text is a unit of any quantity. */
export function isUnit(text: string): boolean {
  const trimmed = text
    .trim()
    .replace(/^[([{<]|[)\]}>]$/g, '')
    .trim();
  return (
    unitOf(trimmed) !== null ||
    FOREIGN_UNIT.test(trimmed) ||
    /^(?:state|on\/off|0\/1|-|local|utc|time|date)$/i.test(trimmed)
  );
}

/**
 * What a heading says, and the row of units below it.
 * @param heading the cell of the heading
 * @param unitCell the cell of the row of units, if there is one
 */
export function headingWords(heading: string, unitCell = ''): HeadingWords {
  const words = wordsOf(heading);
  // Two words may make one: "feed in", "hot water", "from grid".
  const pairs = words.slice(1).map((word, i) => words[i] + word);
  const triples = words.slice(2).map((word, i) => words[i] + words[i + 1] + word);
  const found = new Set<Concept>();
  for (const { concept, stems } of INDEX) {
    const all = [
      ...words,
      ...pairs.filter((pair) => pair.length > 4),
      ...triples.filter((triple) => triple.length > 7),
    ];
    if (all.some((word) => stems.some((stem) => means(word, stem)))) found.add(concept);
  }
  let unit = unitOf(unitCell);
  let foreign = unit === null && FOREIGN_UNIT.test(unitCell.trim()) ? unitCell.trim() : null;
  if (unit === null && foreign === null) {
    const parts = [
      ...[...heading.matchAll(/[([{<]([^)\]}>]*)[)\]}>]/g)].flatMap(([, inside]) => [
        inside,
        ...inside.split(/[\s,;/]+/),
      ]),
      heading.split(/[\s_,;:]+/).at(-1) ?? '',
      ...heading
        .replace(/([\p{Ll}\d])(\p{Lu}\p{Ll})/gu, '$1 $2')
        .split(/[\s_,;:([{)\]}/.-]+/)
        .reverse(),
    ];
    for (const part of parts) {
      unit = unitOf(part);
      if (unit !== null && !(unit === 'litre' && part.length === 1 && !/[([]/.test(heading))) break;
      unit = null;
      if (FOREIGN_UNIT.test(part) && (part.length > 1 || part === part.toUpperCase()) && foreign === null)
        foreign = part;
    }
    if (unit !== null) foreign = null;
  }
  return { has: (concept) => found.has(concept), unit, foreign, words };
}

export const POWER_UNITS: readonly Unit[] = ['W', 'kW'];
export const TEMPERATURE_UNITS: readonly Unit[] = ['C', 'F'];
export const VOLUME_UNITS: readonly Unit[] = ['m3', 'litre', 'ft3', 'ft3x100'];

/** What a unit says of the kind of its numbers; energy and volume may be amounts or registers. */
export function kindOfUnit(unit: Unit): Kind | 'amount' {
  if (POWER_UNITS.includes(unit)) return 'power';
  if (TEMPERATURE_UNITS.includes(unit)) return 'level';
  return unit === 'state' ? 'state' : 'amount';
}
