// element.ts: how are elements of the page made? From names, attributes and plain text: nothing is ever read as markup.

type Child = Node | string;

/** An HTML element with attributes (undefined ones are left out) and children; strings are text. */
export function element<Tag extends keyof HTMLElementTagNameMap>(
  tag: Tag,
  attributes: Readonly<Record<string, string | undefined>> = {},
  ...children: readonly Child[]
): HTMLElementTagNameMap[Tag] {
  const made = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) if (value !== undefined) made.setAttribute(name, value);
  made.append(...children);
  return made;
}

/** A table with a caption, column headings and rows whose first cell heads the row. */
export function tableElement(
  caption: Child,
  headings: readonly string[],
  rows: readonly (readonly string[])[],
): HTMLTableElement {
  const head = element("tr", {}, ...headings.map((text) => element("th", { scope: "col" }, text)));
  const body = rows.map(([first, ...cells]) =>
    element("tr", {}, element("th", { scope: "row" }, first), ...cells.map((text) => element("td", {}, text))),
  );
  return element(
    "table",
    {},
    element("caption", {}, caption),
    element("thead", {}, head),
    element("tbody", {}, ...body),
  );
}
