// Numbers, units, dates and sizes as they are shown, and typed numbers as they are read. Pure: no clock, no locale of
// the machine; what depends on a person (decimal sign, time zone) is handed in.

export type DecimalSign = "." | ",";

const MINUS = "\u2212";
/** Between digits of a group and between a number and its unit: does not break, narrower than a space. */
const THIN = "\u202f";

// ---- Reading what was typed ---------------------------------------------------------------------------------------

/**
 * What a typed text was read as. `decimal` keeps every digit that was typed, trailing zeros too, with "." as its sign
 * and no grouping, so that 0.100 stays 0.100. `foreign` says that the other decimal sign was understood.
 */
export type Typed =
  | { ok: true; decimal: string; foreign: boolean }
  | { ok: false; ambiguous: true; readings: string[] }
  | { ok: false; ambiguous?: undefined; error: string };

const LONGEST = 60;
const PLAIN = /^(\d*)(?:\.(\d*))?$/;
const GROUPED_BY_SPACE = /^\d{1,3}(?: \d{3})+$/;

/**
 * Reads a typed number. The person's decimal sign decides; a text that could mean two numbers a thousandfold apart
 * comes back with both readings, to be asked about. Grouping by spaces is understood, "1.5e-4" and "1.5 × 10^-4" too.
 */
export function readTyped(text: string, decimalSign: DecimalSign): Typed {
  const tidy = text
    .replace(/[\u00a0\u2009\u202f]/g, " ")
    .replace(/[\u2212\u2013]/g, "-")
    .trim();
  if (tidy === "") return refusal("Write a number.");
  if (tidy.length > LONGEST) return refusal(`That is longer than ${LONGEST} characters. Write fewer digits.`);

  const parts = /^([+-]?)\s*([\d.,' ]+?)\s*(?:[eE]\s*([+-]?\d+)|[×x*·]\s*10\s*\^?\s*([+-]?\d+))?$/.exec(tidy);
  if (!parts || !/\d/.test(parts[2] ?? "")) return notANumber(text, decimalSign);
  const negative = parts[1] === "-" ? "-" : "";
  const body = (parts[2] ?? "").trim();
  const exponent = parts[3] ?? parts[4];

  const read = readDigits(body, decimalSign);
  if (read.kind === "no") return notANumber(text, decimalSign);
  const readings = read.readings.map(
    (digits) => negative + digits + (exponent === undefined ? "" : `e${tidyExponent(exponent)}`),
  );
  const first = readings[0] ?? "";
  for (const reading of readings) {
    const value = Number(reading);
    if (!Number.isFinite(value)) return refusal("That number is too large to be worked with. Check its exponent.");
    if (value === 0 && /[1-9]/.test(reading.split("e")[0] ?? "")) {
      return refusal("That number is too small to be told from zero. Check its exponent.");
    }
  }
  if (read.kind === "ask") return { ok: false, ambiguous: true, readings };
  return { ok: true, decimal: first, foreign: read.kind === "foreign" };
}

type Digits = { kind: "ok" | "foreign" | "ask"; readings: string[] } | { kind: "no" };

function readDigits(body: string, sign: DecimalSign): Digits {
  const other = sign === "." ? "," : ".";
  const spaced = ungroup(body, sign, other);
  if (spaced === undefined) return { kind: "no" };
  const mine = count(spaced, sign);
  const theirs = count(spaced, other);

  if (theirs === 0) {
    if (mine <= 1) return plain(spaced.replace(sign, "."), "ok");
    // "1.234.567" by somebody whose decimal sign is the point: it can only be grouping, but that goes against the sign.
    return grouped(spaced, sign) ? { kind: "ask", readings: [spaced.replaceAll(sign, "")] } : { kind: "no" };
  }
  if (mine === 0) {
    if (theirs > 1)
      return grouped(spaced, other) ? { kind: "ok", readings: [spaced.replaceAll(other, "")] } : { kind: "no" };
    const asDecimal = spaced.replace(other, ".");
    // "1,000": three digits after one sign that is not the person's. Nobody groups after a leading zero ("0,100").
    return grouped(spaced, other) && !spaced.startsWith("0")
      ? { kind: "ask", readings: [asDecimal, spaced.replace(other, "")] }
      : plain(asDecimal, "foreign");
  }
  const [whole = "", fraction = "", ...more] = spaced.split(sign);
  if (mine === 1 && more.length === 0 && count(fraction, other) === 0 && grouped(whole, other)) {
    return plain(`${whole.replaceAll(other, "")}.${fraction}`, "ok");
  }
  // "1.234,5" by somebody whose decimal sign is the point.
  const [theirWhole = "", theirFraction = ""] = spaced.split(other);
  if (theirs === 1 && count(theirFraction, sign) === 0 && grouped(theirWhole, sign)) {
    return { kind: "ask", readings: [`${theirWhole.replaceAll(sign, "")}.${theirFraction}`] };
  }
  return { kind: "no" };
}

/** Takes out spaces and apostrophes where they part groups of three; anything else with a space in it is no number. */
function ungroup(body: string, sign: string, other: string): string | undefined {
  const text = body.replaceAll("'", " ");
  if (!text.includes(" ")) return text;
  const at = Math.max(text.indexOf(sign), text.indexOf(other));
  const whole = at < 0 ? text : text.slice(0, at);
  const rest = at < 0 ? "" : text.slice(at);
  if (rest.slice(1).includes(" ") && !/^.\d{3}(?: \d{3})*(?: \d{1,3})?$/.test(rest)) return undefined;
  if (whole.includes(" ") && !GROUPED_BY_SPACE.test(whole)) return undefined;
  return whole.replaceAll(" ", "") + rest.replaceAll(" ", "");
}

function plain(digits: string, kind: "ok" | "foreign"): Digits {
  const parts = PLAIN.exec(digits);
  if (!parts || (parts[1] === "" && (parts[2] ?? "") === "")) return { kind: "no" };
  const whole = parts[1] === "" ? "0" : (parts[1] ?? "0");
  return { kind, readings: [parts[2] ? `${whole}.${parts[2]}` : whole] };
}

function grouped(text: string, by: string): boolean {
  const groups = text.split(by);
  return (
    groups.length > 1 && /^\d{1,3}$/.test(groups[0] ?? "") && groups.slice(1).every((group) => /^\d{3}$/.test(group))
  );
}

function count(text: string, sign: string): number {
  return text.split(sign).length - 1;
}

function tidyExponent(exponent: string): string {
  return String(Number.parseInt(exponent, 10));
}

function refusal(error: string): Typed {
  return { ok: false, error };
}

function notANumber(text: string, sign: DecimalSign): Typed {
  const shown = text.trim().length > 24 ? `${text.trim().slice(0, 24)}…` : text.trim();
  return refusal(`“${shown}” is not a number. Write digits, for example 0${sign}100.`);
}

/** A stored decimal ("0.100", "-1.5e-4") as this person reads it: own decimal sign, true minus, exponent as a power. */
export function showDecimal(decimal: string, decimalSign: DecimalSign = "."): string {
  const [digits = "", exponent] = decimal.split("e");
  const shown = digits.replace("-", MINUS).replace(".", decimalSign);
  return exponent === undefined ? shown : `${shown} × 10${superscript(Number(exponent))}`;
}

const RAISED = "⁰¹²³⁴⁵⁶⁷⁸⁹";

function superscript(whole: number): string {
  const digits = String(Math.abs(whole)).replace(/\d/g, (digit) => RAISED[Number(digit)] ?? digit);
  return whole < 0 ? `⁻${digits}` : digits;
}

// ---- Numbers -------------------------------------------------------------------------------------------------------

/** pH to two decimals, or to as many as are asked for. Never clipped: below 0 and above 14 are pH values too. */
export function formatPh(pH: number, decimals = 2, decimalSign: DecimalSign = "."): string {
  return fixed(pH, decimals, decimalSign);
}

/** A fixed number of decimals with a true minus; a negative number that rounds to zero loses its sign. */
export function fixed(value: number, decimals: number, decimalSign: DecimalSign = "."): string {
  if (!Number.isFinite(value)) return "not a number";
  const text = value.toFixed(decimals);
  const signed = /^-0(?:\.0*)?$/.test(text) ? text.slice(1) : text;
  return signed.replace("-", MINUS).replace(".", decimalSign);
}

/** To a number of significant figures, trailing zeros kept, never in powers of ten: 0.040000 to four is "0.04000". */
export function significant(value: number, figures: number, decimalSign: DecimalSign = "."): string {
  if (!Number.isFinite(value)) return "not a number";
  if (value === 0) return fixed(0, Math.max(0, figures - 1), decimalSign);
  const exponent = exponentOf(value, figures);
  const decimals = figures - 1 - exponent;
  if (decimals >= 0) return fixed(value, Math.min(decimals, 100), decimalSign);
  const step = 10 ** -decimals;
  return fixed(Math.round(value / step) * step, 0, decimalSign);
}

/** Mantissa and power of ten: 9.0895e-4 to five figures is { mantissa: "9.0895", exponent: -4 }. */
export function scientificParts(
  value: number,
  figures: number,
  decimalSign: DecimalSign = ".",
): { mantissa: string; exponent: number } {
  if (!Number.isFinite(value)) return { mantissa: "not a number", exponent: 0 };
  const [mantissa = "0", exponent = "0"] = value.toExponential(figures - 1).split("e");
  return { mantissa: mantissa.replace("-", MINUS).replace(".", decimalSign), exponent: Number(exponent) };
}

/**
 * The parts of a shown number: written out between 0.001 and 99 999, with a power of ten (`exponent`, `raised`) outside.
 */
export function numberParts(
  value: number,
  figures: number,
  decimalSign: DecimalSign = ".",
): { text: string; exponent?: number; raised?: string } {
  if (value === 0 || !Number.isFinite(value)) return { text: significant(value, figures, decimalSign) };
  const exponent = exponentOf(value, figures);
  if (exponent >= -3 && exponent < 5) return { text: significant(value, figures, decimalSign) };
  const parts = scientificParts(value, figures, decimalSign);
  return { text: parts.mantissa, exponent: parts.exponent, raised: String(parts.exponent).replace("-", MINUS) };
}

/** The same as one line of text: "9.090 × 10⁻⁴". */
export function formatNumber(value: number, figures: number, decimalSign: DecimalSign = "."): string {
  const parts = numberParts(value, figures, decimalSign);
  return parts.exponent === undefined ? parts.text : `${parts.text} × 10${superscript(parts.exponent)}`;
}

const CONCENTRATION_STEPS = [
  { unit: "mol/L", factor: 1, from: 0.1 },
  { unit: "mmol/L", factor: 1e3, from: 1e-4 },
  { unit: "µmol/L", factor: 1e6, from: 1e-7 },
  { unit: "nmol/L", factor: 1e9, from: 1e-10 },
] as const;

/** An amount concentration in the unit that keeps its number short; below 0.1 nmol/L a power of ten with mol/L. */
export function formatConcentration(
  molPerL: number,
  figures = 3,
  decimalSign: DecimalSign = ".",
): { text: string; unit: string } {
  if (molPerL === 0) return { text: "0", unit: "mol/L" };
  const step = CONCENTRATION_STEPS.find((each) => Math.abs(molPerL) >= each.from);
  if (!step) return { text: formatNumber(molPerL, figures, decimalSign), unit: "mol/L" };
  return { text: significant(molPerL * step.factor, figures, decimalSign), unit: step.unit };
}

/** Where a shown number has its point, so that a column can stand on it: "−12.50" → { whole: "−12", rest: ".50" }. */
export function atPoint(text: string, decimalSign: DecimalSign = "."): { whole: string; rest: string } {
  const at = text.indexOf(decimalSign);
  if (at >= 0) return { whole: text.slice(0, at), rest: text.slice(at) };
  const power = text.search(/\s*[×e]/);
  return power < 0 ? { whole: text, rest: "" } : { whole: text.slice(0, power), rest: text.slice(power) };
}

function exponentOf(value: number, figures: number): number {
  return Number(value.toExponential(Math.min(100, figures - 1)).split("e")[1]);
}

const SIZES = ["bytes", "KiB", "MiB", "GiB"] as const;

/** "412 bytes", "3.1 KiB", "32 MiB": steps of 1024, as the limit of an upload is counted. */
export function formatBytes(bytes: number): string {
  let size = bytes;
  let step = 0;
  while (size >= 1024 && step < SIZES.length - 1) {
    size /= 1024;
    step += 1;
  }
  const text = step === 0 || size >= 100 || Number.isInteger(size) ? String(Math.round(size)) : size.toFixed(1);
  return `${text} ${step === 0 && bytes === 1 ? "byte" : SIZES[step]}`;
}

/** 12345 → "12 345", by thin spaces, for counts. */
export function formatCount(whole: number): string {
  const digits = String(Math.abs(Math.trunc(whole)));
  const shown = digits.length < 5 ? digits : digits.replace(/\B(?=(\d{3})+$)/g, THIN);
  return whole < 0 ? MINUS + shown : shown;
}

/** A SHA-256 (or a part of it) in groups of four lower-case digits. */
export function groupsOfFour(hex: string): string[] {
  return hex.toLowerCase().match(/.{1,4}/g) ?? [];
}

// ---- Dates and times -------------------------------------------------------------------------------------------------

const MONTHS = [
  "January",
  "February",
  "March",
  "April",
  "May",
  "June",
  "July",
  "August",
  "September",
  "October",
  "November",
  "December",
] as const;
const WEEKDAYS = ["Sunday", "Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday"] as const;

type Wall = { year: number; month: number; day: number; hour: string; minute: string; second: string };

/** "1 December 2026, 09:31 UTC", or "1 December 2026, 10:31 Europe/Berlin (UTC+1)" for a person's IANA time zone. */
export function formatDateTime(at: Date | string, timeZone = "UTC", options: { seconds?: boolean } = {}): string {
  const when = instant(at);
  const wall = wallClock(when, timeZone);
  const time = options.seconds ? `${wall.hour}:${wall.minute}:${wall.second}` : `${wall.hour}:${wall.minute}`;
  return `${wall.day} ${MONTHS[wall.month - 1]} ${wall.year}, ${time} ${zoneName(when, timeZone)}`;
}

/** "09:31 UTC", "10:31 UTC+1": the time of day, its zone in short. */
export function formatTime(at: Date | string, timeZone = "UTC"): string {
  const when = instant(at);
  const wall = wallClock(when, timeZone);
  return `${wall.hour}:${wall.minute} ${offsetName(when, timeZone)}`;
}

/** "30 November 2026". A date without a time ("2026-11-30") is that day everywhere; an instant needs the zone. */
export function formatDate(at: Date | string, timeZone = "UTC", options: { weekday?: boolean } = {}): string {
  const { year, month, day } = dayOf(at, timeZone);
  const date = `${day} ${MONTHS[month - 1]} ${year}`;
  return options.weekday ? `${WEEKDAYS[new Date(Date.UTC(year, month - 1, day)).getUTCDay()]} ${date}` : date;
}

/** Whole calendar days from one day to the other in that zone; negative when `at` lies ahead. */
export function daysSince(at: Date | string, now: Date | string, timeZone = "UTC"): number {
  return Math.round((dayNumber(dayOf(now, timeZone)) - dayNumber(dayOf(at, timeZone))) / 86_400_000);
}

/** "today", "yesterday", "3 days ago", "in 2 days", for a sentence: "signed 3 days ago". */
export function relativeDay(at: Date | string, now: Date | string, timeZone = "UTC"): string {
  const days = daysSince(at, now, timeZone);
  if (days === 0) return "today";
  if (days === 1) return "yesterday";
  if (days === -1) return "tomorrow";
  return days > 0 ? `${days} days ago` : `in ${-days} days`;
}

/** `datetime` of a time element. */
export function machineTime(at: Date | string): string {
  return instant(at).toISOString();
}

/** Whether the name is a time zone of the IANA data base that this machine knows. */
export function isTimeZone(name: string): boolean {
  try {
    new Intl.DateTimeFormat("en-GB", { timeZone: name });
    return true;
  } catch {
    return false;
  }
}

function instant(at: Date | string): Date {
  const when = typeof at === "string" ? new Date(at) : at;
  if (Number.isNaN(when.getTime())) throw new RangeError(`not a time: ${String(at)}`);
  return when;
}

function wallClock(when: Date, timeZone: string): Wall {
  const parts = new Intl.DateTimeFormat("en-GB", {
    timeZone,
    hourCycle: "h23",
    year: "numeric",
    month: "numeric",
    day: "numeric",
    hour: "2-digit",
    minute: "2-digit",
    second: "2-digit",
  }).formatToParts(when);
  const part = (type: Intl.DateTimeFormatPartTypes) => parts.find((each) => each.type === type)?.value ?? "";
  return {
    year: Number(part("year")),
    month: Number(part("month")),
    day: Number(part("day")),
    hour: part("hour"),
    minute: part("minute"),
    second: part("second"),
  };
}

function dayOf(at: Date | string, timeZone: string): { year: number; month: number; day: number } {
  const date = typeof at === "string" ? /^(\d{4})-(\d{2})-(\d{2})$/.exec(at) : null;
  if (date) return { year: Number(date[1]), month: Number(date[2]), day: Number(date[3]) };
  return wallClock(instant(at), timeZone);
}

function dayNumber(day: { year: number; month: number; day: number }): number {
  return Date.UTC(day.year, day.month - 1, day.day);
}

function zoneName(when: Date, timeZone: string): string {
  return timeZone === "UTC" ? "UTC" : `${timeZone} (${offsetName(when, timeZone)})`;
}

function offsetName(when: Date, timeZone: string): string {
  const parts = new Intl.DateTimeFormat("en-GB", { timeZone, timeZoneName: "shortOffset" }).formatToParts(when);
  const offset = parts.find((each) => each.type === "timeZoneName")?.value ?? "UTC";
  return offset.replace("GMT", "UTC").replace("-", MINUS).replace(/\+0$/, "");
}
