/**
 * Text for a spreadsheet cell. A spreadsheet takes a cell that begins with one of these as a
 * formula; a quote in front makes it text (OWASP ASVS 5.0, 2025, 1.2.10).
 */
export const safeCell = (text: string): string => (/^[=+\-@\t\r]/.test(text) ? `'${text}` : text);
