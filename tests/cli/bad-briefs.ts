/** A brief with one thing wrong (or several), and the fault lines that it must give, as patterns. */
export interface BadBrief {
  readonly what: string;
  readonly brief: unknown; // a text stands for itself, anything else is written as JSON
  readonly faults: readonly RegExp[];
}

const LEVEL = { value: 5, unit: "mmol/L" };
/** A brief with nothing wrong: the twin of all that follow. */
export const GOOD_BRIEF = {
  title: "Zinc with a little iron, an invented sample",
  analytes: [{ ion: "Zn2+", concentration: LEVEL }],
  matrix: [
    { component: "Fe3+", concentration: { value: 0.1, unit: "mmol/L" } },
    { component: "SO4^2-", concentration: { value: 6, unit: "mmol/L" } },
  ],
  portion: { volumeML: 25, titrationVolumeML: 100 },
  requirement: { relativeExpandedUncertaintyPercent: 1 },
  laboratory: { avoid: ["cyanide"], available: null, detection: ["visual"], heating: true, buretteML: 25 },
  temperatureC: 25,
};

const but = (change: object): object => ({ ...GOOD_BRIEF, ...change });
const analyte = (change: object): object => but({ analytes: [{ ion: "Zn2+", concentration: LEVEL, ...change }] });
const level = (concentration: unknown): object => analyte({ concentration });
const matrix = (...rows: readonly object[]): object => but({ matrix: rows });
const row = (component: unknown): object => ({ component, concentration: LEVEL });
const asText = (from: string, to: string): string => JSON.stringify(GOOD_BRIEF).replace(from, to);

export const BAD_BRIEFS: readonly BadBrief[] = [
  {
    what: "text that is not JSON",
    brief: '{"title": "x",',
    faults: [/^\$: expected a field name .* line 1, column 15$/],
  },
  { what: "nothing at all", brief: "", faults: [/^\$: expected a value .* the end of the text/] },
  {
    what: "NaN",
    brief: asText('"value":5', '"value":NaN'),
    faults: [/^\$\.analytes\[0\]\.concentration\.value: expected a value .* found "NaN"/],
  },
  {
    what: "a number too large",
    brief: asText('"value":5', '"value":1e400'),
    faults: [/^\$\.analytes\[0\]\.concentration\.value: .*too large to hold/],
  },
  {
    what: "a field that stands twice",
    brief: asText('"title":', '"title":"other","title":'),
    faults: [/^\$\.title: expected each field once/],
  },
  {
    what: "five megabytes",
    brief: JSON.stringify(but({ title: "x".repeat(5_000_000) })),
    faults: [/^\$: expected at most 262144 bytes/],
  },
  { what: "a list instead of a brief", brief: [GOOD_BRIEF], faults: [/^\$: expected an object, found a list of 1$/] },
  { what: "null", brief: null, faults: [/^\$: expected an object, found null$/] },
  { what: "no title", brief: but({ title: undefined }), faults: [/^\$\.title: expected a text, found nothing$/] },
  {
    what: "a title of blanks",
    brief: but({ title: "   " }),
    faults: [/^\$\.title: expected a text that is not empty/],
  },
  {
    what: "a title too long",
    brief: but({ title: "x".repeat(201) }),
    faults: [/^\$\.title: expected at most 200 characters/],
  },
  {
    what: "a title that moves the cursor",
    brief: but({ title: "Zinc\u001b[2J" }),
    faults: [/^\$\.title: expected a text without control characters/],
  },
  {
    what: "no analytes",
    brief: but({ analytes: [] }),
    faults: [/^\$\.analytes: expected a list of at least 1, found an empty list$/],
  },
  {
    what: "seven analytes",
    brief: but({
      analytes: ["Zn2+", "Pb2+", "Cu2+", "Ni2+", "Co2+", "Cd2+", "Mn2+"].map((ion) => ({ ion, concentration: LEVEL })),
    }),
    faults: [/^\$\.analytes: expected a list of at most 6, found a list of 7$/],
  },
  {
    what: "an analyte as a text",
    brief: but({ analytes: ["Zn2+"] }),
    faults: [/^\$\.analytes\[0\]: expected an object, found "Zn2\+"$/],
  },
  {
    what: "an unknown ion",
    brief: analyte({ ion: "Qx2+" }),
    faults: [/^\$\.analytes\[0\]\.ion: expected a known ion or component \(nearest: .+\), found "Qx2\+"$/],
  },
  {
    what: "an ambiguous ion",
    brief: matrix(row("iron")),
    faults: [/^\$\.matrix\[0\]\.component: expected one ion.*Fe2\+ or Fe3\+|Fe3\+ or Fe2\+.*found "iron"$/],
  },
  {
    what: "an ion as a number",
    brief: matrix(row(26)),
    faults: [/^\$\.matrix\[0\]\.component: expected a text, found 26$/],
  },
  {
    what: "a negative level",
    brief: level({ value: -1, unit: "mmol/L" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.value: expected a number of at least 0, found -1$/],
  },
  {
    what: "nothing of the analyte",
    brief: level({ value: 0, unit: "mmol/L" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.value: expected a level above 0/],
  },
  {
    what: "a level as a text",
    brief: level({ value: "5", unit: "mmol/L" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.value: expected a number, found "5"$/],
  },
  {
    what: "a level beyond any solution",
    brief: level({ value: 500, unit: "mol/L" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.value: expected at most 20 mol\/L, found 500 mol\/L$/],
  },
  {
    what: "an unknown unit",
    brief: level({ value: 5, unit: "ppm" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.unit: expected one of mol\/L, .*found "ppm"$/],
  },
  {
    what: "no unit",
    brief: level({ value: 5 }),
    faults: [/^\$\.analytes\[0\]\.concentration\.unit: expected one of mol\/L, .*found nothing$/],
  },
  {
    what: "a formula without the element",
    brief: level({ value: 5, unit: "mg/L", as: "Fe2O3" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.as: expected a formula that holds Zn, found "Fe2O3"$/],
  },
  {
    what: "a formula beside a molar unit",
    brief: level({ ...LEVEL, as: "ZnO" }),
    faults: [/^\$\.analytes\[0\]\.concentration\.as: expected no "as" beside mmol\/L/],
  },
  {
    what: "an analyte that also stands in the matrix",
    brief: matrix(row("zinc")),
    faults: [
      /^\$\.matrix\[0\]\.component: expected a component that is not an analyte, found Zn2\+, which \$\.analytes\[0\]\.ion asks for$/,
    ],
  },
  {
    what: "an unknown way to report",
    brief: analyte({ report: "total" }),
    faults: [/^\$\.analytes\[0\]\.report: expected one of individual, sum, found "total"$/],
  },
  {
    what: "one analyte reported in two ways",
    brief: but({
      analytes: [
        { ion: "Zn2+", concentration: LEVEL, report: "sum" },
        { ion: "Zn2+", concentration: LEVEL },
      ],
    }),
    faults: [/^\$\.analytes\[1\]\.report: expected "sum"/],
  },
  {
    what: "a misspelt field",
    brief: but({ matrx: [] }),
    faults: [/^\$\.matrx: expected one of the fields title, analytes, .*found an unknown field "matrx"$/],
  },
  {
    what: "a misspelt field deep inside",
    brief: but({ laboratory: { avoids: [] } }),
    faults: [/^\$\.laboratory\.avoids: expected one of the fields avoid, /],
  },
  {
    what: "a titration volume below the portion",
    brief: but({ portion: { volumeML: 50, titrationVolumeML: 25 } }),
    faults: [/^\$\.portion\.titrationVolumeML: expected at least the portion's volume, 50 mL, found 25 mL$/],
  },
  {
    what: "a portion above the titration volume by default",
    brief: but({ portion: { volumeML: 250 } }),
    faults: [/^\$\.portion\.titrationVolumeML: .*found 100 mL \(the default\)$/],
  },
  {
    what: "a portion of nothing",
    brief: but({ portion: { volumeML: 0 } }),
    faults: [/^\$\.portion\.volumeML: expected a number of at least/],
  },
  {
    what: "a requirement of nothing",
    brief: but({ requirement: { relativeExpandedUncertaintyPercent: 0 } }),
    faults: [/^\$\.requirement\.relativeExpandedUncertaintyPercent: expected a number of at least/],
  },
  {
    what: "an unknown reagent to avoid",
    brief: but({ laboratory: { avoid: ["cyanid"] } }),
    faults: [/^\$\.laboratory\.avoid\[0\]: expected a known reagent id \(nearest: cyanide, .*found "cyanid"$/],
  },
  {
    what: "an unknown reagent on the shelf",
    brief: but({ laboratory: { available: ["EDTA", "xylenol-orangee"] } }),
    faults: [/^\$\.laboratory\.available\[1\]: expected a known reagent id \(nearest: xylenol-orange, /],
  },
  {
    what: "an unknown detection",
    brief: but({ laboratory: { detection: ["nose"] } }),
    faults: [/^\$\.laboratory\.detection\[0\]: expected one of visual, photometric, electrode, found "nose"$/],
  },
  {
    what: "no detection",
    brief: but({ laboratory: { detection: [] } }),
    faults: [/^\$\.laboratory\.detection: expected a list of at least 1/],
  },
  {
    what: "heating neither true nor false",
    brief: but({ laboratory: { heating: "no" } }),
    faults: [/^\$\.laboratory\.heating: expected true or false, found "no"$/],
  },
  {
    what: "a temperature that water does not have",
    brief: but({ temperatureC: 300 }),
    faults: [/^\$\.temperatureC: expected a number of at most 100, found 300$/],
  },
  {
    what: "several things at once",
    brief: {
      title: "",
      analytes: [
        { ion: "Qx2+", concentration: { value: -1, unit: "ppm" } },
        { ion: "Qx2+", concentration: LEVEL },
      ],
      matrix: [row("zinc"), { component: "Fe3+", concentration: { value: 1, unit: "mg/L", as: "CaO" } }],
      laboratory: { avoid: ["cyanid"] },
    },
    faults: [
      /^\$\.title: /,
      /^\$\.analytes\[0\]\.concentration\.value: /,
      /^\$\.analytes\[0\]\.concentration\.unit: /,
      /^\$\.analytes\[1\]\.ion: /,
      /^\$\.matrix\[1\]\.concentration\.as: /,
      /^\$\.laboratory\.avoid\[0\]: /,
    ],
  },
];
