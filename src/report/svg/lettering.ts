// lettering.ts: how is text set in a picture, when no font can be measured?
import { cleanLine, escapeXml } from "../clean.js";

/** Families that exist without a download; the drawing must survive any of them. */
export const fontFamily = "Helvetica, Arial, 'Liberation Sans', 'DejaVu Sans', sans-serif";

/** Upper estimate of a character's width in units of the font size (wide faces of the families above, bold included). */
function widthEm(character: string): number {
  if (/[\p{Mn}\p{Me}]/u.test(character)) return 0;
  if ((character.codePointAt(0) ?? 0) >= 0x1100) return /[\u2000-\u22ff]/.test(character) ? 0.9 : 1.1;
  if (/[ilj.,:;'|! ()[\]/]/.test(character)) return 0.42;
  if (/[mwMW@%—]/.test(character)) return 1.05;
  return /[A-Z]/.test(character) ? 0.78 : 0.66;
}

/** Upper estimate of the width of a line, px. */
export function textWidthPx(text: string, fontPx: number): number {
  return [...text].reduce((sum, character) => sum + widthEm(character), 0) * fontPx;
}

/** Breaks a word that is too wide into pieces that fit. */
function pieces(word: string, widthPx: number, fontPx: number): string[] {
  const parts = [""];
  for (const character of word) {
    if (textWidthPx(parts[parts.length - 1] + character, fontPx) > widthPx && parts[parts.length - 1] !== "")
      parts.push("");
    parts[parts.length - 1] += character;
  }
  return parts;
}

/** The cleaned text in lines that fit into `widthPx`, broken at blanks, inside a word only where it must; [] when empty. */
export function fittingLines(text: string, widthPx: number, fontPx: number): string[] {
  const words = cleanLine(text)
    .split(/\s+/)
    .filter((word) => word !== "")
    .flatMap((word) => pieces(word, widthPx, fontPx));
  const lines: string[] = [];
  for (const word of words) {
    const longer = lines.length === 0 ? word : `${lines[lines.length - 1]} ${word}`;
    if (lines.length > 0 && textWidthPx(longer, fontPx) <= widthPx) lines[lines.length - 1] = longer;
    else lines.push(word);
  }
  return lines;
}

export interface TextStyle {
  sizePx: number;
  colour: string;
  bold?: true;
  anchor?: "start" | "middle" | "end";
}

/** One escaped line of text with its baseline at (x, y). */
export function textLine(text: string, x: number, y: number, style: TextStyle): string {
  const weight = style.bold ? ' font-weight="600"' : "";
  const anchor = style.anchor && style.anchor !== "start" ? ` text-anchor="${style.anchor}"` : "";
  return `<text x="${x}" y="${y}" font-size="${style.sizePx}" fill="${style.colour}"${weight}${anchor}>${escapeXml(text)}</text>`;
}

const raised: Record<string, string> = {
  "0": "⁰",
  "1": "¹",
  "2": "²",
  "3": "³",
  "4": "⁴",
  "5": "⁵",
  "6": "⁶",
  "7": "⁷",
  "8": "⁸",
  "9": "⁹",
  "-": "⁻",
};

/** An integer as superscript: -7 -> "⁻⁷". */
export function superscript(exponent: number): string {
  return [...String(exponent)].map((digit) => raised[digit]).join("");
}

/** A unit as it is printed in journals: `(hbar/e) S/cm` -> `(ħ/e) S/cm`, `e^2/h` -> `e²/h`, `e/2pi` -> `e/2π`. */
export function unitInPicture(unit: string): string {
  return cleanLine(unit)
    .replace(/\bhbar\b/g, "ħ")
    .replace(/\^(-?\d+)/g, (_, exponent: string) => superscript(Number(exponent)))
    .replace(/(\d|\b)pi\b/g, "$1π");
}
