/**
 * GDAL's metadata tag (42112): a small XML list of items of the dataset and of its bands.
 * GDAL escapes the text of an item twice when it writes and undoes both when it reads
 * (seen in files of GDAL 3.6); so does this file.
 */

export interface BandMetadata {
  readonly description?: string;
  readonly unit?: string;
  /** value = scale · stored + offset */
  readonly scale: number;
  readonly offset: number;
}

const ITEM = /<Item\s([^>]*?)(?:\/>|>([\s\S]*?)<\/Item>)/g;
const ATTRIBUTE = /([\w:]+)\s*=\s*(?:"([^"]*)"|'([^']*)')/g;

/** What the tag says of one band (0-based). */
export function bandMetadata(xml: string, band: number): BandMetadata {
  const roles = new Map<string, string>();
  for (const [, attributeText = "", content = ""] of xml.matchAll(ITEM)) {
    const attributes = new Map<string, string>();
    for (const [, name = "", double, single] of attributeText.matchAll(ATTRIBUTE))
      attributes.set(name, unescapeXml(double ?? single ?? ""));
    const role = attributes.get("role");
    if (role !== undefined && attributes.get("sample") === String(band))
      roles.set(role, unescapeXml(unescapeXml(content)));
  }
  const number = (role: string, otherwise: number): number => {
    const value = Number(roles.get(role) ?? otherwise);
    return Number.isFinite(value) ? value : otherwise;
  };
  const description = roles.get("description");
  const unit = roles.get("unittype");
  return {
    ...(description ? {description} : {}),
    ...(unit ? {unit} : {}),
    scale: number("scale", 1),
    offset: number("offset", 0),
  };
}

export interface MetadataToWrite {
  readonly items: readonly (readonly [name: string, text: string])[];
  readonly bands: readonly {readonly description?: string; readonly unit?: string}[];
}

/** The text of the tag; empty when there is nothing to say. */
export function metadataXml({items, bands}: MetadataToWrite): string {
  const lines = items.map(([name, text]) => `  <Item name="${escapeXml(name)}">${itemText(text)}</Item>\n`);
  bands.forEach(({description, unit}, band) => {
    if (description)
      lines.push(`  <Item name="DESCRIPTION" sample="${band}" role="description">${itemText(description)}</Item>\n`);
    if (unit) lines.push(`  <Item name="UNITTYPE" sample="${band}" role="unittype">${itemText(unit)}</Item>\n`);
  });
  return lines.length === 0 ? "" : `<GDALMetadata>\n${lines.join("")}</GDALMetadata>\n`;
}

const ENTITIES: Readonly<Record<string, string>> = {
  "&": "&amp;",
  "<": "&lt;",
  ">": "&gt;",
  '"': "&quot;",
  "'": "&apos;",
};

/** Characters that XML 1.0 does not allow at all are left out. */
const escapeXml = (text: string): string =>
  text
    // biome-ignore lint/suspicious/noControlCharactersInRegex: these are the characters to remove
    .replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/g, "")
    .replace(/[&<>"']/g, (character) => ENTITIES[character]!);

const itemText = (text: string): string => escapeXml(escapeXml(text));

const unescapeXml = (text: string): string =>
  text.replace(/&(?:#(\d+)|#x([0-9a-fA-F]+)|(amp|lt|gt|quot|apos));/g, (whole, decimal, hexadecimal, name) => {
    if (name !== undefined) return {amp: "&", lt: "<", gt: ">", quot: '"', apos: "'"}[name as "amp"];
    const code = decimal !== undefined ? Number(decimal) : Number.parseInt(hexadecimal, 16);
    return code <= 0x10ffff ? String.fromCodePoint(code) : whole;
  });
