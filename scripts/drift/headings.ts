/** Headings of a table of past results, as laboratories write them in several languages. */

export const fields = [
  "date",
  "temperatureC",
  "source",
  "lineNm",
  "measuredNm",
  "errorNm",
  "uncNm",
  "expandedUncNm",
  "instrument",
] as const;
export type Field = (typeof fields)[number];

/** What a column's unit turns a number into the field's own unit with. */
export type Convert = (value: number) => number;

export interface Column {
  index: number;
  heading: string;
  convert: Convert;
}

/**
 * Words that make a heading a field's, plain letters only; a heading is compared as a whole after its unit and its punctuation are taken off. English,
 * German, French, Spanish, Italian, Portuguese, Dutch, Swedish, Danish and Norwegian, Polish, Czech, Finnish.
 */
const words: Record<Field, string> = {
  date:
    "date day when datetime timestamp checkdate checkedon measuredon performed performedon dateofcheck dateofmeasurement measurementdate " +
    "calibrationdate datum tag messdatum pruefdatum kalibrierdatum zeitpunkt datumzeit jour datemesure datedemesure datecontrole " +
    "fecha dia fechamedida fechademedicion data giorno datamisura datamedicao meetdatum dato maledato matdatum " +
    "datapomiaru dzien den datummereni paiva paivamaara pvm mittauspaiva",
  temperatureC:
    "temperature temp t tc degc roomtemperature roomtemp ambienttemperature ambient labtemperature labtemp temperaturec tempc troom tlab tair " +
    "temperatur raumtemperatur umgebungstemperatur labortemperatur luft lufttemperatur traum temperatureambiante temperaturedelapiece tempambiante " +
    "temperatura temperaturaambiente tempamb temperaturaambiental temperaturaamb kamertemperatuur omgevingstemperatuur temperatuur rumstemperatur " +
    "romtemperatur stuetemperatur temperaturaotoczenia teplota teplotamistnosti lampotila huonelampotila",
  source:
    "source lamp referencesource reference lampid sourceid lightsource standard calibrationsource spectrallamp lamptype quelle lampe lichtquelle " +
    "referenzquelle referenz spektrallampe kalibrierlampe lampen sourcedereference lampespectrale lampara fuente fuentedeluz lampada sorgente " +
    "fonte lamp bron referentiebron lichtbron lampa kalla ljuskalla kilde lyskilde referencekilde zrodlo zrodloswiatla vybojka zdroj lamppu valonlahde",
  lineNm:
    "line linenm lineref wavelength wavelengthnm reference referencenm referencewavelength refwavelength ref refnm nominal nominalnm nominalwavelength " +
    "true truenm truewavelength expected expectednm certified certifiednm certifiedwavelength spectralline lambda lambdaref lambda0 literature " +
    "linie liniennm spektrallinie wellenlaenge referenzwellenlaenge sollwert soll sollnm sollwellenlaenge literaturwert linienlage " +
    "raie raienm longueuronde longueurdonde valeurdereference valeurvraie raiespectrale linea lineanm longituddeonda longitudonda " +
    "valordereferencia riga riganm lunghezzadonda lunghezzaonda valorediriferimento linha comprimentodeonda valorreferencia lijn golflengte " +
    "referentiewaarde linje linjenm vaglangd bolgelaengde bolgelengde referansebolgelengde linia dlugoscfali wartoscodniesienia cara " +
    "spektralnicara vlnovadelka viiva aallonpituus",
  measuredNm:
    "measured measurednm measuredwavelength measurement found foundnm observed observednm indicated indicatednm reading readingnm position " +
    "positionnm peak peaknm peakwavelength value result measuredvalue lambdameasured lambdameas meas measnm actual actualnm asfound " +
    "gemessen gemessennm messwert istwert ist istnm istwellenlaenge anzeige angezeigt gemessenewellenlaenge peaklage " +
    "mesure mesurenm mesuree valeurmesuree longueurdondemesuree lue lecture medido medida medidonm valormedido lectura longituddeondamedida " +
    "misurato misuratonm misura valoremisurato letto lettura medidanm leitura gemeten gemetennm meetwaarde aflezing uppmatt uppmattnm " +
    "matvarde matt malt maltnm maaltverdi maling avlest zmierzona zmierzone zmierzony wartosczmierzona pomiar odczyt namereno zmereno " +
    "namerenahodnota mitattu mitattunm mittausarvo",
  errorNm:
    "error errornm deviation deviationnm difference differencenm bias biasnm offset offsetnm delta deltanm deltalambda measurederror " +
    "abweichung abweichungnm fehler fehlernm messabweichung differenz erreur ecart ecartnm desviacion errornm desvio errore scarto scostamento " +
    "erro afwijking fout avvikelse fel afvigelse fejl avvik feil blad odchylenie odchylka chyba poikkeama virhe",
  uncNm:
    "unc uncnm uncertainty uncertaintynm standarduncertainty stduncertainty standarduncertaintynm u unm sigma sigmanm sd sdnm stdev std " +
    "standarddeviation unsicherheit messunsicherheit standardunsicherheit standardmessunsicherheit unsicherheitnm incertitude incertitudetype " +
    "incertidumbre incertidumbretipica incertidumbreestandar incertezza incertezzatipo incerteza incertezapadrao onzekerheid " +
    "standaardonzekerheid osakerhet standardosakerhet usikkerhed usikkerhet standardusikkerhed standardusikkerhet niepewnosc " +
    "niepewnoscstandardowa nejistota standardninejistota epavarmuus mittausepavarmuus",
  expandedUncNm:
    "expandedunc expandeduncnm expandeduncertainty expandeduncertaintynm uexpanded u95 u95nm uk2 uk2nm erweiterteunsicherheit " +
    "erweitertemessunsicherheit incertitudeelargie incertidumbreexpandida incertezzaestesa incertezaexpandida uitgebreideonzekerheid utvidgadosakerhet " +
    "ekspanderetusikkerhed utvidetusikkerhet niepewnoscrozszerzona rozsirenanejistota laajennettuepavarmuus",
  instrument:
    "instrument instrumentid device spectrometer spectrophotometer equipment serial serialnumber geraet geraetenummer spektrometer appareil instrumento " +
    "strumento apparaat apparat przyrzad pristroj laite",
};

const known = new Map<string, Field>();
for (const field of fields) for (const word of words[field].split(" ")) if (!known.has(word)) known.set(word, field);
// Written by more than one field's people; with a column of its own for the line, "reference" is the lamp.
known.set("reference", "lineNm");
known.set("standard", "source");
known.set("ref", "lineNm");

/** Letters and digits only, without marks: "Messwert λ [nm]" -> "messwertlambda". */
export function plainHeading(heading: string): string {
  return withoutUnit(heading)
    .replaceAll("ß", "ss")
    .replaceAll(/ä/gi, "ae")
    .replaceAll(/ö/gi, "oe")
    .replaceAll(/ü/gi, "ue")
    .replaceAll(/æ/gi, "ae")
    .replaceAll(/[øØ]/g, "o")
    .replaceAll(/[łŁ]/g, "l")
    .replaceAll("λ", "lambda")
    .replaceAll(/[Δδ]/g, "delta")
    .replaceAll("σ", "sigma")
    .normalize("NFD")
    .replaceAll(/[\u0300-\u036f]/g, "")
    .toLowerCase()
    .replaceAll(/[^a-z0-9]/g, "");
}

const bracket = /[([{]\s*([^()[\]{}]*?)\s*[)\]}]/g;
const trailingUnit = /(?:\s*[,/]\s*|\s+in\s+|[\s_])(nm|å|angstrom|pm|µm|μm|um|°c|°f|degc|degf|k)\s*$/i;
/** "U (k=2)": tells an expanded uncertainty. */
const coverage = /^k\s*=\s*2([.,]0*)?$/i;

function withoutUnit(heading: string): string {
  return heading
    .replaceAll(bracket, (_, inside: string) => (coverage.test(inside) ? "k2" : ""))
    .trimEnd()
    .replace(trailingUnit, "");
}

function unitOf(heading: string): string {
  const inBrackets = [...heading.matchAll(bracket)]
    .map((match) => match[1]!)
    .filter((inside) => !coverage.test(inside));
  return (inBrackets[0] ?? trailingUnit.exec(heading)?.[1] ?? "").toLowerCase();
}

/** The field of a heading, or null. A capital U alone is an expanded uncertainty, a small one a standard uncertainty. */
export function fieldOf(heading: string): Field | null {
  const plain = plainHeading(heading);
  if (/^\s*U\b/.test(heading) && (plain === "u" || plain === "unm")) return "expandedUncNm";
  const exact = known.get(plain);
  if (exact !== undefined) return exact;
  // Without marks the German way ("gerät" -> "geraet") misses those who drop them ("gerat").
  const dropped = known.get(plain.replaceAll(/ae/g, "a").replaceAll(/oe/g, "o").replaceAll(/ue/g, "u"));
  return dropped ?? null;
}

const lengthFactors: Record<string, number> = {
  å: 0.1,
  a: 0.1,
  angstrom: 0.1,
  pm: 0.001,
  µm: 1000,
  μm: 1000,
  um: 1000,
};

export function converterOf(field: Field, heading: string): Convert {
  const unit = unitOf(heading);
  if (field === "temperatureC") {
    if (unit === "k") return (value) => value - 273.15;
    if (unit === "°f" || unit === "f" || unit === "degf") return (value) => ((value - 32) * 5) / 9;
    return (value) => value;
  }
  const factor = lengthFactors[unit] ?? 1;
  return factor === 1 ? (value) => value : (value) => value * factor;
}
