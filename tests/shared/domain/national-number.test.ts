import { describe, expect, test } from 'vitest';
import { isNationalNumber } from '../../../shared/domain/national-number.ts';

// Specimens that publishers print or that stand in the literature of each number; all recalled from memory.
const specimens: [source: string, number: string][] = [
  ['NHS number, worked example of the NHS Data Dictionary', '943 476 5919'],
  ['ten digits by Luhn (Ontario), the run 987654321 with its check digit', '9876543217'],
  ['Australian Medicare card, specimen of Services Australia', '2123 45670 1'],
  ['Australian healthcare identifier, specimen of its developer guide', '8003 6081 6669 0503'],
  ['Norwegian fødselsnummer, specimen in its literature', '010107 50160'],
  ['Swedish personnummer, specimen of Skatteverket', '811218-9876'],
  ['Dutch burgerservicenummer, specimen in its literature', '111222333'],
  ['Belgian national register number, specimen in its literature', '85.07.30-033 28'],
  ['French NIR, specimen in its literature', '2 55 08 14 168 025 38'],
  ['Polish PESEL, specimen in its literature', '44051401359'],
  ['Swiss AHV number, specimen of the Central Compensation Office', '756.9217.0769.85'],
  ['Brazilian CPF, specimen in its literature', '529.982.247-25'],
  ['New Zealand NHI, test number of HISO 10046', 'ZZZ0016'],
  ['Finnish henkilötunnus, specimen of its agency', '131052-308T'],
  ['Spanish DNI, specimen in its literature', '12345678Z'],
  ['Irish PPS number, specimen in its literature', '1234567T'],
  ['German Krankenversichertennummer, specimen in its literature', 'A123456780'],
  ['Italian codice fiscale, specimen in its literature', 'RSSMRA85T10A562S'],
  ['Danish CPR number, specimen in its literature', '070761-4285'],
];

describe('isNationalNumber', () => {
  test.each(specimens)('%s', (_, number) => {
    expect(isNationalNumber(number)).toBe(true);
    expect(isNationalNumber(` ${number.toLowerCase()} `)).toBe(true);
  });

  test('one wrong digit is no number any more where a check digit stands', () => {
    expect(isNationalNumber('943 476 5918')).toBe(false);
    expect(isNationalNumber('12345678A')).toBe(false);
    expect(isNationalNumber('131052-308U')).toBe(false);
    expect(isNationalNumber('ZZZ0017')).toBe(false);
    expect(isNationalNumber('756.9217.0769.86')).toBe(false);
  });

  test.each(['', 'Acute', '20:15', '0000000000', '1', '2026-09-21', 'Bay 12'])('%j is none', (text) => {
    expect(isNationalNumber(text)).toBe(false);
  });
});
