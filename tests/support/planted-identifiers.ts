/**
 * Values that could identify a patient, by kind. Specimen numbers: 943 476 5919 is printed in the NHS Data Dictionary's
 * worked example of the check digit; 078-05-1120 is the retired specimen of the US Social Security Administration; QQ 12 34
 * 56 C of HMRC begins with letters that are never given, so AB 12 34 56 C stands in its place; 07700 900123 lies in Ofcom's
 * range for drama; addresses are of RFC 2606 and RFC 5737.
 */
export const plantedValues: [kind: string, value: string][] = [
  ['name', 'Olivia Fairweather'],
  ['name', 'Mr Quillfeather'],
  ['date of birth', '1950-02-01'],
  ['record number', 'MRN 00482913'],
  ['record number', 'H0482913'],
  ['insurance number', '078-05-1120'],
  ['insurance number', 'AB 12 34 56 C'],
  ['national patient number', '943 476 5919'],
  ['telephone number', '07700 900123'],
  ['telephone number', '+44 7700 900123'],
  ['e-mail address', 'olivia@example.org'],
  ['postal address', '12 Mill Lane'],
  ['postcode', 'SW1A 1AA'],
  ['web address', 'https://example.org/p/1'],
  ['IP address', '192.0.2.44'],
  ['free text', 'came in after falling off a ladder at home today'],
];

/** Headers that say that their column could identify a patient, by kind. */
export const plantedHeaders: [kind: string, header: string][] = [
  ['name', 'Surname'],
  ['name', 'patientName'],
  ['date of birth', 'DOB'],
  ['record number', 'MRN'],
  ['insurance number', 'Insurance No'],
  ['national patient number', 'NHS_Number'],
  ['telephone number', 'mobile phone'],
  ['e-mail address', 'e-mail'],
  ['postal address', 'home_address'],
  ['postcode', 'Post Code'],
  ['web address', 'URL'],
  ['IP address', 'client IP'],
  ['free text', 'Presenting Complaint'],
];
