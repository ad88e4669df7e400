/**
 * Cautions shown wherever a reference source is chosen.
 *
 * They are the usual ones for the kind of source and its elements, and they defer: the last entry always says who decides.
 * Basis: common laboratory practice; no limit or distance is given that a person could mistake for permission.
 */
import type { Source } from "../contract/sources.ts";

export type Caution = Source["cautions"][number];

/** Elements whose lamps send out strong ultraviolet light when the envelope lets it through. */
const ultravioletElements = new Set(["Hg", "D", "Xe", "Cd", "Zn"]);
/** Elements that are poisonous themselves when a lamp breaks. */
const poisonousWhenBroken: Record<string, string> = { Hg: "Mercury", Cd: "Cadmium" };

const ultraviolet: Caution = {
  title: "Ultraviolet light.",
  text: "Keep eyes and skin out of it, at fibre ends too: what it does is felt hours later. Never look at a bare lamp to see whether it is lit. Lamps that pass the deep ultraviolet make ozone: air the room.",
};
const highVoltage: Caution = {
  title: "High voltage.",
  text: "Switch the supply off and wait before touching the lamp or its leads, and let the lamp cool.",
};
const pressure: Caution = {
  title: "Hot and under pressure.",
  text: "A high-pressure lamp can burst while it is hot: keep its housing closed and let it cool before opening it.",
};
const laser: Caution = {
  title: "Laser light.",
  text: "Go by the class of the laser and by the power measured at this bench, not by the label alone: labels have been found too low, and doubled green lasers can also send out invisible infrared. Never look into the beam, its reflection or a fibre; fix the beam below eye level, end it in a stop, and attenuate it before a spectrometer's input.",
};
const perchloricAcid: Caution = {
  title: "Perchloric acid in a sealed cell.",
  text: "A strong, oxidising acid: do not open or warm the cell, keep it from anything that burns, and treat a leak as a spill of acid.",
};
const otherStandard: Caution = {
  title: "Absorption standard.",
  text: "Handle the cell or filter by its edges; a liquid standard may hold acid. Its data sheet says what it holds.",
};
const whoDecides: Caution = {
  title: "Who decides.",
  text: "The maker's instructions, your laboratory's own rules, local codes and competent safety staff come first; Wavekeep gives no permission to work.",
};

function poisonCaution(element: string): Caution {
  return {
    title: `${poisonousWhenBroken[element]} in the lamp.`,
    text: "If it breaks: leave, air the room, keep others out and call those in charge of spills. No vacuum cleaner; it spreads the vapour.",
  };
}

/**
 * The cautions for one source, most particular first.
 *
 * @param source.kind      kind of source
 * @param source.elements  element symbols of its lines
 * @param source.name      what it is, in words: holmium oxide is known by it where the elements are not given
 */
export function cautionsFor(source: Pick<Source, "kind" | "elements" | "name">): Caution[] {
  const cautions: Caution[] = [];
  const isLamp =
    source.kind === "low-pressure-lamp" || source.kind === "high-pressure-lamp" || source.kind === "built-in";
  if (source.kind === "laser") cautions.push(laser);
  if (source.kind === "absorption-standard") {
    const holmium = source.elements.includes("Ho") || /holmium|perchloric/i.test(source.name);
    cautions.push(holmium ? perchloricAcid : otherStandard);
  }
  if (isLamp && source.elements.some((element) => ultravioletElements.has(element))) cautions.push(ultraviolet);
  if (isLamp)
    for (const element of source.elements) if (element in poisonousWhenBroken) cautions.push(poisonCaution(element));
  if (source.kind === "high-pressure-lamp") cautions.push(pressure);
  if (isLamp) cautions.push(highVoltage);
  return [...cautions, whoDecides];
}
