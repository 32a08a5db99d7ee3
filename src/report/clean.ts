// clean.ts: how is a text from outside (title, name, unit) made safe to print, to put in a cell and to put in a picture?

/**
 * One line without control characters: they become one blank each run (a title must not move the cursor, break a row or make
 * XML ill-formed). Also removes the characters that reverse the direction of writing, unpaired surrogates and non-characters.
 */
export function cleanLine(text: string): string {
  return text
    .replace(/[\p{Cc}\u2028\u2029]+/gu, " ")
    .replace(/[\u202a-\u202e\u2066-\u2069\p{Cs}\ufffe\uffff]/gu, "")
    .trim();
}

/** Text as XML character data or attribute value: cleaned, and the five markup characters as entities. */
export function escapeXml(text: string): string {
  return cleanLine(text)
    .replaceAll("&", "&amp;")
    .replaceAll("<", "&lt;")
    .replaceAll(">", "&gt;")
    .replaceAll('"', "&quot;")
    .replaceAll("'", "&#39;");
}
