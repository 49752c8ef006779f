// Writes the parameters of the product's own fit of visits.csv.gz to fitted.json, for make-need.py to work from.
// Run from the project's folder: node --import tsx tests/reference/wrenhythe/export-fit.js
import { writeFileSync } from 'node:fs';
import { URL } from 'node:url';
import { fitReferenceLog, parametersOf } from '../../support/fit-reference-log.ts';

const { arrival, stay } = fitReferenceLog();
const sixDigits = (_, value) => (typeof value === 'number' ? Number(value.toPrecision(6)) : value);
writeFileSync(
  new URL('fitted.json', import.meta.url),
  JSON.stringify({ source: 'export-fit.js: the fit of visits.csv.gz, six digits', ...parametersOf(arrival, stay) }, sixDigits),
);
