import type { DatedSystem, DatedTariff } from '../../../shared/api/property.ts';
import { FUEL_WORDS } from './boiler-kinds.ts';
import { toText } from './parse.ts';

/** A system record in a line, for the list of records. */
export function systemSays(system: DatedSystem): string {
  const heaters = system.heaters ?? [];
  const panels = (system.panels ?? []).reduce((sum, panel) => sum + panel.kwp, 0);
  return [
    `${toText(system.cylinder.volumeLitres)} litres`,
    system.boiler.fuel === 'none' ? 'no boiler' : `${FUEL_WORDS[system.boiler.fuel]} boiler`,
    ...(heaters.length > 0 ? [`heater ${heaters.map((heater) => toText(heater.ratedKw)).join(' + ')} kW`] : []),
    ...(panels > 0 ? [`${toText(panels)} kWp`] : []),
  ].join(', ');
}

/** A tariff in a line. */
export function tariffSays(tariff: DatedTariff): string {
  const paid = { metered: 'metered', deemed: 'deemed', none: 'not paid' }[tariff.exportPayment ?? 'metered'];
  return (
    `${tariff.currency} per kWh: fuel ${toText(tariff.fuelPerKwh)}, import ${toText(tariff.importPerKwh)}, ` +
    `export ${toText(tariff.exportPerKwh)} (${paid})` +
    (tariff.windows?.length
      ? `, ${tariff.windows.length === 1 ? 'one window' : `${tariff.windows.length} windows`}`
      : '')
  );
}
