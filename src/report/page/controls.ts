// controls.ts: with what does a person choose temperature, level, doping, axis and responses?
import { dopingRange } from "../../curves/doping.js";
import { plain } from "../numbers.js";
import { element } from "./element.js";
import { type Curves, heldLevel, type Shown, type Source } from "./state.js";

/** Changes what is shown. */
export type Change = (part: Partial<Shown>) => void;

/** A part of the page that follows what is shown. */
export interface Control {
  readonly root: HTMLElement;
  update(shown: Shown, curves: Curves): void;
}

interface SliderWords {
  readonly id: string;
  readonly label: string;
  readonly unit: string;
}

/** A slider with a field for the exact number under one label. */
function slider({ id, label, unit }: SliderWords, changed: (value: number) => void) {
  const range = element("input", { type: "range", id: `${id}-range`, "aria-label": label });
  const field = element("input", { type: "number", id, step: "any" });
  const root = element(
    "div",
    { class: "slider" },
    element("label", { for: id }, label),
    element("span", { class: "field" }, field, element("span", { class: "unit" }, unit)),
    range,
  );
  const tell = (input: HTMLInputElement): void => {
    const value = input.value === "" ? Number.NaN : Number(input.value);
    if (Number.isFinite(value)) changed(Math.min(Number(range.max), Math.max(Number(range.min), value)));
  };
  range.addEventListener("input", () => tell(range));
  field.addEventListener("change", () => tell(field));
  const set = (value: number, least: number, most: number, digits: number): void => {
    for (const input of [range, field]) [input.min, input.max] = [String(least), String(most)];
    range.step = String((most - least) / 2000 || 1);
    range.value = String(value);
    const words = String(Number(value.toFixed(digits)));
    range.setAttribute("aria-valuetext", `${words} ${unit}`);
    if (document.activeElement !== field) field.value = words;
  };
  return { root, range, set };
}

/** Temperature: a slider where the result can be read at any, and a button for each computed one. */
export function temperatureControl({ result, live }: Source, id: string, change: Change): Control {
  const buttons = result.temperature_K.map((kelvin) => {
    const button = element("button", { type: "button" }, `${plain(kelvin)} K`);
    button.addEventListener("click", () => change({ temperatureK: kelvin }));
    return button;
  });
  const choice = element("div", { class: "choice", role: "group", "aria-label": "Computed temperatures" }, ...buttons);
  const moving = slider({ id: `${id}-temperature`, label: "Temperature", unit: "K" }, (value) =>
    change({ temperatureK: Number(value.toFixed(1)) }),
  );
  const root = element("div", { class: "control" });
  if (live) root.append(moving.root);
  else root.append(element("span", { class: "label" }, "Temperature"));
  root.append(choice);
  root.append(element("p", { class: "hint" }, temperatureHint(live)));
  return {
    root,
    update({ temperatureK }) {
      for (const [at, button] of buttons.entries())
        button.setAttribute("aria-pressed", String(result.temperature_K[at] === temperatureK));
      if (live) moving.set(temperatureK, Math.ceil(live.leastK), Math.floor(live.mostK), 1);
    },
  };
}

function temperatureHint(live: Source["live"]): string {
  if (live === undefined)
    return "This result carries no spectra, or its window ends too soon: only the computed temperatures can be shown.";
  return `Read in the page from the spectra of the sweep, ${plain(Math.ceil(live.leastK))} to ${plain(Math.floor(live.mostK))} K; at the buttons as computed. Between computed temperatures a bar is the larger of the two neighbouring ones; a sweep asked for a colder temperature may take finer energy nodes and differ by its resolution.`;
}

/** Level and doping: two names of one cursor; the one moved last stays when the temperature changes. */
export function cursorControl({ result }: Source, id: string, change: Change): Control {
  const level = slider({ id: `${id}-level`, label: "Level", unit: "eV" }, (at) =>
    change({ held: { kind: "level", at } }),
  );
  const doping = slider({ id: `${id}-doping`, label: "Doping", unit: "electrons per cell" }, (at) =>
    change({ held: { kind: "doping", at } }),
  );
  const hint = element("p", { class: "hint" });
  const levels = result.level_eV;
  return {
    root: element("div", { class: "control" }, level.root, doping.root, hint),
    update({ held }, curves) {
      const at = heldLevel(curves, held);
      const [least, most] = dopingRange(curves.dopings);
      level.set(at, levels[0], levels[levels.length - 1], 5);
      const added = held.kind === "doping" ? held.at : interpolated(curves, at);
      doping.set(Math.min(most, Math.max(least, added)), least, most, 6);
      hint.textContent =
        held.kind === "doping"
          ? "The doping is held: the level follows the temperature."
          : "The level is held: the doping follows the temperature.";
    },
  };
}

function interpolated({ dopings: { levelsEv, perCell } }: Curves, levelEv: number): number {
  const at = Math.max(
    1,
    levelsEv.findIndex((each) => each >= levelEv),
  );
  const part = (levelEv - levelsEv[at - 1]) / (levelsEv[at] - levelsEv[at - 1] || 1);
  return perCell[at - 1] + part * ((perCell[at] ?? perCell[at - 1]) - perCell[at - 1]);
}

/** A box with one of several choices. */
function choiceOf(id: string, label: string, names: readonly string[], changed: (at: number) => void) {
  const select = element("select", { id }, ...names.map((name, at) => element("option", { value: String(at) }, name)));
  select.addEventListener("change", () => changed(Number(select.value)));
  return { root: element("div", { class: "pick" }, element("label", { for: id }, label), select), select };
}

/** Axis, and the computed temperature drawn beside. */
export function viewControl({ result }: Source, id: string, change: Change): Control {
  const axis = choiceOf(`${id}-axis`, "Axis", ["level", "doping"], (at) =>
    change({ axis: at === 1 ? "doping" : "level" }),
  );
  const kelvins = result.temperature_K.map((kelvin) => `${plain(kelvin)} K`);
  const beside = choiceOf(`${id}-beside`, "Beside it", ["nothing", ...kelvins], (at) =>
    change({ beside: at === 0 ? undefined : at - 1 }),
  );
  return {
    root: element("div", { class: "control row" }, axis.root, beside.root),
    update(shown) {
      axis.select.value = shown.axis === "doping" ? "1" : "0";
      beside.select.value = String(shown.beside === undefined ? 0 : shown.beside + 1);
    },
  };
}

/** Which responses are shown; an empty element where there is one only. */
export function responseControl({ result }: Source, id: string, change: Change): Control {
  const boxes = result.responses.map((_, at) => element("input", { type: "checkbox", id: `${id}-response-${at}` }));
  const lines = result.responses.map(({ name }, at) =>
    element("label", { for: boxes[at].id, class: "box" }, boxes[at], ` ${name}`),
  );
  for (const box of boxes)
    box.addEventListener("change", () =>
      change({ responses: boxes.flatMap((each, at) => (each.checked ? [at] : [])) }),
    );
  const list = element("fieldset", { class: "boxes" }, element("legend", {}, "Responses"), ...lines);
  return {
    root: boxes.length < 2 ? element("div", {}) : element("div", { class: "control" }, list),
    update({ responses }) {
      for (const [at, box] of boxes.entries()) box.checked = responses.includes(at);
    },
  };
}
