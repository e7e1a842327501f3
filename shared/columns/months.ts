/** Months by their names and usual short forms, in the languages that logs are headed in. */
const NAMES: readonly string[] = [
  'jan january januar jänner janner janvier janv enero ene gennaio gen januari janeiro',
  'feb february februar feber février fevrier févr fevr fév febrero febbraio februari fev fevereiro',
  'mar march märz marz mär mrz maerz mars marzo maart mrt março marco',
  'apr april avril avr abril abr aprile',
  'may mai mayo maggio mag mei maj maio',
  'jun june juni juin junio giugno giu junho',
  'jul july juli juillet juil julio luglio lug julho',
  'aug august août aout aoû agosto ago augustus augusti',
  'sep sept september septembre septiembre settembre set setembro',
  'oct october oktober okt octobre octubre ottobre ott out outubro',
  'nov november novembre noviembre novembro',
  'dec december dezember dez décembre decembre déc diciembre dic dicembre dezembro',
];

const MONTHS = new Map<string, number>();
NAMES.forEach((names, i) => names.split(' ').forEach((name) => MONTHS.set(name, i + 1)));

/** The month, 1..12, that a name or short form means; null if it is none. */
export function monthOf(word: string): number | null {
  return MONTHS.get(word.toLowerCase().replace(/\.$/, '')) ?? null;
}
