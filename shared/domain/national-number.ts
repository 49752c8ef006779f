/**
 * National patient and personal numbers that carry a check digit, so that a chance match is rare.
 * Each rule names where it is published; all are written down from memory of those texts and tested
 * with the specimen numbers that the publishers print, where they print one.
 */

const sumOfProducts = (digits: readonly number[], weights: readonly number[]) =>
  weights.reduce((sum, weight, index) => sum + weight * digits[index], 0);

function isLuhn(digits: readonly number[]): boolean {
  let sum = 0;
  digits.forEach((digit, index) => {
    const doubled = (digits.length - index) % 2 === 0 ? digit * 2 : digit;
    sum += doubled > 9 ? doubled - 9 : doubled;
  });
  return sum % 10 === 0;
}

const isDayAndMonth = (day: number, month: number) => day >= 1 && day <= 31 && month >= 1 && month <= 12;

/** United Kingdom: NHS, CHI and Health and Care number, 10 digits, modulus 11 (NHS Data Dictionary, "NHS number"). */
function isUnitedKingdom(d: readonly number[]): boolean {
  if (d.length !== 10 || new Set(d).size === 1) return false;
  const check = 11 - (sumOfProducts(d, [10, 9, 8, 7, 6, 5, 4, 3, 2]) % 11);
  return (check === 11 ? 0 : check) === d[9];
}

/** Canada, Ontario health number: 10 digits, the last by Luhn (ISO/IEC 7812-1, annex B). */
const isOntario = (d: readonly number[]) => d.length === 10 && d[0] > 0 && isLuhn(d);

/** Australia: individual healthcare identifier, 16 digits from 800360, Luhn (AS 5017). */
const isAustralianIdentifier = (d: readonly number[]) =>
  d.length === 16 && d.slice(0, 6).join('') === '800360' && isLuhn(d);

/** Australia: Medicare card, 10 or 11 digits, first 2 to 6, weights 1 3 7 9 (Services Australia). */
function isAustralianMedicare(d: readonly number[]): boolean {
  if ((d.length !== 10 && d.length !== 11) || d[0] < 2 || d[0] > 6) return false;
  return sumOfProducts(d, [1, 3, 7, 9, 1, 3, 7, 9]) % 10 === d[8];
}

/** Norway: fødselsnummer, 11 digits, two check digits by modulus 11 (Skatteetaten). */
function isNorway(d: readonly number[]): boolean {
  if (d.length !== 11 || !isDayAndMonth((d[0] % 4) * 10 + d[1], (d[2] % 4) * 10 + d[3])) return false;
  const first = (11 - (sumOfProducts(d, [3, 7, 6, 1, 8, 9, 4, 5, 2]) % 11)) % 11;
  const second = (11 - (sumOfProducts(d, [5, 4, 3, 2, 7, 6, 5, 4, 3, 2]) % 11)) % 11;
  return first === d[9] && second === d[10];
}

/** Sweden: personnummer, 10 or 12 digits with a date, Luhn over the last ten (Skatteverket). */
function isSweden(d: readonly number[]): boolean {
  if (d.length !== 10 && d.length !== 12) return false;
  const ten = d.slice(-10);
  const day = ten[4] * 10 + ten[5];
  return isDayAndMonth(day > 60 ? day - 60 : day, ten[2] * 10 + ten[3]) && isLuhn(ten);
}

/** Netherlands: burgerservicenummer, 9 digits, "eleven test" (Rijksdienst voor Identiteitsgegevens). */
const isNetherlands = (d: readonly number[]) =>
  d.length === 9 && new Set(d).size > 1 && sumOfProducts(d, [9, 8, 7, 6, 5, 4, 3, 2, -1]) % 11 === 0;

/** Belgium: national register number, 11 digits, 97 minus the first nine modulo 97 (Rijksregister). */
function isBelgium(d: readonly number[]): boolean {
  if (d.length !== 11) return false;
  const check = d[9] * 10 + d[10];
  const nine = Number(d.slice(0, 9).join(''));
  return check === 97 - (nine % 97) || check === 97 - ((2_000_000_000 + nine) % 97);
}

/** France: NIR, 13 digits and a key, 97 minus the number modulo 97 (INSEE). */
function isFrance(d: readonly number[]): boolean {
  if (d.length !== 15 || d[0] < 1 || d[0] > 2) return false;
  return d[13] * 10 + d[14] === 97 - (Number(d.slice(0, 13).join('')) % 97);
}

/** Poland: PESEL, 11 digits, weights 1 3 7 9 (Ministry of Digital Affairs). */
function isPoland(d: readonly number[]): boolean {
  if (d.length !== 11 || !isDayAndMonth(d[4] * 10 + d[5], ((d[2] * 10 + d[3] - 1) % 20) + 1)) return false;
  return (10 - (sumOfProducts(d, [1, 3, 7, 9, 1, 3, 7, 9, 1, 3]) % 10)) % 10 === d[10];
}

/** Switzerland: AHV number, 13 digits from 756, EAN-13 check (Central Compensation Office). */
const isSwitzerland = (d: readonly number[]) =>
  d.length === 13 &&
  d.slice(0, 3).join('') === '756' &&
  (10 - (sumOfProducts(d, [1, 3, 1, 3, 1, 3, 1, 3, 1, 3, 1, 3]) % 10)) % 10 === d[12];

/** Brazil: CPF, 11 digits, two check digits by modulus 11 (Receita Federal). */
function isBrazil(d: readonly number[]): boolean {
  if (d.length !== 11 || new Set(d).size === 1) return false;
  const check = (weights: readonly number[]) => ((sumOfProducts(d, weights) * 10) % 11) % 10;
  return check([10, 9, 8, 7, 6, 5, 4, 3, 2]) === d[9] && check([11, 10, 9, 8, 7, 6, 5, 4, 3, 2]) === d[10];
}

const byDigits = [
  isUnitedKingdom,
  isOntario,
  isAustralianIdentifier,
  isAustralianMedicare,
  isNorway,
  isSweden,
  isNetherlands,
  isBelgium,
  isFrance,
  isPoland,
  isSwitzerland,
  isBrazil,
];

/** New Zealand: NHI, three letters without I and O and four digits, modulus 11 (HISO 10046). */
function isNewZealand(text: string): boolean {
  if (!/^[A-HJ-NP-Z]{3}\d{4}$/.test(text)) return false;
  const alphabet = 'ABCDEFGHJKLMNPQRSTUVWXYZ';
  const values = [...text].map((sign, index) => (index < 3 ? alphabet.indexOf(sign) + 1 : Number(sign)));
  const remainder = sumOfProducts(values, [7, 6, 5, 4, 3, 2]) % 11;
  return remainder !== 0 && (11 - remainder) % 10 === values[6];
}

/** Finland: henkilötunnus, DDMMYY, a century sign, three digits, a sign by modulus 31 (Digital and Population Data Services Agency). */
function isFinland(text: string): boolean {
  const match = /^(\d{6})[-+A-FU-Y](\d{3})([0-9A-Y])$/.exec(text);
  return match !== null && '0123456789ABCDEFHJKLMNPRSTUVWXY'[Number(match[1] + match[2]) % 31] === match[3];
}

/** Spain: DNI and NIE, a letter by modulus 23 (Ministerio del Interior). */
function isSpain(text: string): boolean {
  const match = /^([XYZ]?)(\d{7,8})([A-Z])$/.exec(text);
  if (!match || match[1].length + match[2].length !== 8) return false;
  const lead = match[1] === '' ? '' : String('XYZ'.indexOf(match[1]));
  return 'TRWAGMYFPDXBNJZSQVHLCKE'[Number(lead + match[2]) % 23] === match[3];
}

/** Ireland: PPS number, seven digits, a check letter by modulus 23, perhaps a second letter (Department of Social Protection). */
function isIreland(text: string): boolean {
  const match = /^(\d{7})([A-W])([A-IW]?)$/.exec(text);
  if (!match) return false;
  const second = match[3] === '' || match[3] === 'W' ? 0 : match[3].charCodeAt(0) - 64;
  const sum = sumOfProducts([...match[1]].map(Number), [8, 7, 6, 5, 4, 3, 2]) + 9 * second;
  return 'WABCDEFGHIJKLMNOPQRSTUV'[sum % 23] === match[2];
}

/** Germany: Krankenversichertennummer, a letter and nine digits, modulus 10 with weights 1 and 2 (§ 290 SGB V). */
function isGermany(text: string): boolean {
  if (!/^[A-Z]\d{9}$/.test(text)) return false;
  const letter = String(text.charCodeAt(0) - 64).padStart(2, '0');
  const digits = [...(letter + text.slice(1, 9))].map(Number);
  const sum = digits.reduce((total, digit, index) => {
    const product = digit * (index % 2 === 0 ? 1 : 2);
    return total + (product > 9 ? product - 9 : product);
  }, 0);
  return sum % 10 === Number(text[9]);
}

/** Italy: codice fiscale, by its shape of 16 signs (Agenzia delle Entrate). */
const isItaly = (text: string) => /^[A-Z]{6}\d{2}[A-EHLMPRST]\d{2}[A-Z]\d{3}[A-Z]$/.test(text);

/** Denmark: CPR number with its hyphen; since 2007 without a check digit, so its date decides (CPR-kontoret). */
function isDenmark(text: string): boolean {
  const match = /^(\d{2})(\d{2})\d{2}-\d{4}$/.exec(text);
  return match !== null && isDayAndMonth(Number(match[1]), Number(match[2]));
}

const byText = [isNewZealand, isFinland, isSpain, isIreland, isGermany, isItaly];

/**
 * True when the text is a national patient or personal number with a valid check digit; spaces, dots,
 * hyphens and slashes between its signs do not matter.
 */
export function isNationalNumber(text: string): boolean {
  const trimmed = text.trim().toUpperCase();
  if (trimmed.length < 7 || trimmed.length > 24) return false;
  if (isFinland(trimmed) || isDenmark(trimmed)) return true;
  const bare = trimmed.replace(/[\s.\-/]/g, '');
  if (/^\d+$/.test(bare)) {
    const digits = [...bare].map(Number);
    return byDigits.some((rule) => rule(digits));
  }
  return byText.some((rule) => rule(bare));
}
