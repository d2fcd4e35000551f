const FORM = /^\d{4}-\d{4}-\d{4}-\d{3}[\dX]$/;

/**
 * Whether a text is an ORCID iD: sixteen digits in groups of four, the last a check digit by ISO 7064 mod 11-2
 * (structure of the ORCID identifier, ORCID support pages).
 */
export function isOrcid(text: string): boolean {
  if (!FORM.test(text)) return false;
  const digits = text.replaceAll('-', '');
  let total = 0;
  for (const digit of digits.slice(0, 15)) total = (total + Number(digit)) * 2;
  const check = (12 - (total % 11)) % 11;
  return digits[15] === (check === 10 ? 'X' : String(check));
}

export const orcidUrl = (orcid: string): string => `https://orcid.org/${orcid}`;
