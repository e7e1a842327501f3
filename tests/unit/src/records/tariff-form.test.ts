import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { DatedTariff } from '../../../../shared/api/property.ts';
import { emptyTariffForm, emptyWindow, fromTariff, toTariff } from '../../../../src/components/records/tariff-form.ts';
import { DAYS } from '../../../../src/components/records/week.ts';

const price = fc.integer({ min: -9999, max: 99999 }).map((n) => n / 1000);
const tariff = fc.record({
  from: fc.constantFrom('2024-04-01', '2026-01-01'),
  currency: fc.constantFrom('GBP', 'EUR', 'AUD'),
  fuelPerKwh: price,
  importPerKwh: price,
  exportPerKwh: price,
  exportPayment: fc.constantFrom('metered' as const, 'deemed' as const, 'none' as const),
});

describe('the form of a tariff', () => {
  it('shows and gives back every tariff unchanged', () => {
    fc.assert(
      fc.property(tariff, fc.subarray(DAYS, { minLength: 1 }), (raw, days) => {
        const full = {
          ...raw,
          windows: [{ days, start: '23:30', end: '05:30', clock: 'standard' as const, importPerKwh: 0.09 }],
        };
        const parsed = DatedTariff.parse(full);
        expect(toTariff(fromTariff(parsed, '2020-01-01'))).toEqual({ tariff: parsed, issues: [] });
      }),
    );
  });

  it('takes pence, decimal commas and twelve-hour times', () => {
    const form = {
      ...emptyTariffForm('2026-04-01', 'gbp'),
      fuelPerKwh: '6.2p',
      importPerKwh: '0,245',
      exportPerKwh: '£0.15',
      windows: [
        { ...emptyWindow(), days: ['sun' as const, 'mon' as const], start: '11.30pm', end: '5.30', importPerKwh: '9p' },
      ],
    };
    const { tariff: sent, issues } = toTariff(form);
    expect(issues).toEqual([]);
    expect(DatedTariff.parse(sent)).toEqual({
      from: '2026-04-01',
      currency: 'GBP',
      fuelPerKwh: 0.062,
      importPerKwh: 0.245,
      exportPerKwh: 0.15,
      exportPayment: 'metered',
      windows: [{ days: ['mon', 'sun'], start: '23:30', end: '05:30', clock: 'civil', importPerKwh: 0.09 }],
    });
  });

  it('asks for no export price where exports are not paid', () => {
    const form = {
      ...emptyTariffForm('2026-04-01', 'GBP'),
      fuelPerKwh: '0.06',
      importPerKwh: '0.25',
      exportPayment: 'none' as const,
    };
    expect(toTariff(form).issues).toEqual([]);
  });

  it('tells what is wrong by the API’s paths', () => {
    const form = { ...emptyTariffForm('', 'pounds'), windows: [{ ...emptyWindow(), days: [] }] };
    expect(toTariff(form).issues.map((issue) => issue.path)).toEqual([
      'from',
      'currency',
      'windows.0.days',
      'windows.0.start',
      'windows.0.end',
      'windows.0.importPerKwh',
      'fuelPerKwh',
      'importPerKwh',
      'exportPerKwh',
    ]);
  });
});
