// Is a file what its name and its sender say? Judged by its first bytes (FIL-02). Programs and scripts are refused whatever they
// are called; pages of markup are refused under another name; the rest must not contradict itself.
import { fileTypeFromBuffer } from "file-type";

export type FileVerdict =
  /** `type` is what the content says, null where it says nothing (plain text, instruments' own formats) */
  { ok: true; type: string | null } | { ok: false; why: "program" | "script" | "disguised"; found: string };

/** Judges by the first bytes; 4 kB are enough, more tell some formats within archives apart. */
export async function judgeFile(file: {
  name: string;
  announcedType: string;
  first: Uint8Array;
}): Promise<FileVerdict> {
  const ending = /\.([a-z0-9]{1,10})$/i.exec(file.name)?.[1]?.toLowerCase() ?? "";
  if (PROGRAM_ENDINGS.has(ending)) return { ok: false, why: "program", found: `.${ending}` };
  const program = programOf(file.first);
  if (program !== null) return { ok: false, why: program === "#!" ? "script" : "program", found: program };
  const sniffed = (await fileTypeFromBuffer(file.first))?.mime ?? null;
  if (sniffed !== null && PROGRAM_TYPES.has(sniffed)) return { ok: false, why: "program", found: sniffed };
  const markup = markupOf(file.first);
  if (markup !== null) return judgeMarkup(markup, ending, file.announcedType);
  const type = sniffed === null ? null : plainType(sniffed);
  const disguised: FileVerdict = { ok: false, why: "disguised", found: type ?? "none" };
  const expected = TYPES_OF_ENDINGS[ending];
  if (expected !== undefined && (type === null || !expected.includes(type))) return disguised;
  // The ending is one of text, or none of those above: then binary content of a known kind contradicts only a text's name.
  if (type !== null && TEXT_ENDINGS.has(ending) && !type.startsWith("text/")) return disguised;
  if (type !== null && contradicts(plainType(file.announcedType), type)) return disguised;
  return { ok: true, type };
}

/** Common endings of programs and scripts for the usual systems; common practice, no source. */
const PROGRAM_ENDINGS = new Set(
  "exe com scr pif msi msp dll sys cpl ocx bat cmd ps1 psm1 vbs vbe js jse wsf wsh hta lnk reg jar app dmg pkg deb rpm apk sh command".split(
    " ",
  ),
);

const PROGRAM_TYPES = new Set([
  "application/x-msdownload",
  "application/x-elf",
  "application/x-mach-binary",
  "application/x-deb",
  "application/x-rpm",
  "application/x-apple-diskimage",
  "application/x-ms-shortcut",
  "application/java-vm",
  "application/java-archive",
  "application/vnd.android.package-archive",
  "application/wasm",
  "application/x-shockwave-flash",
  "application/x-google-chrome-extension",
]);

/** First bytes of programs: PE and DOS (MZ), ELF, Mach-O in both orders and widths; and the first two characters of a script. */
function programOf(first: Uint8Array): string | null {
  const starts = (...bytes: number[]) => bytes.every((byte, index) => first[index] === byte);
  if (starts(0x23, 0x21) || starts(0xef, 0xbb, 0xbf, 0x23, 0x21)) return "#!";
  // "MZ" alone could begin a text; a program's header goes on with bytes that no text has.
  if (starts(0x4d, 0x5a) && first.subarray(0, 64).includes(0)) return "MZ";
  if (starts(0x7f, 0x45, 0x4c, 0x46)) return "ELF";
  for (const last of [0xce, 0xcf]) {
    if (starts(0xfe, 0xed, 0xfa, last) || starts(last, 0xfa, 0xed, 0xfe)) return "Mach-O";
  }
  if (starts(0xca, 0xfe, 0xba, 0xbe)) return "Mach-O or Java class";
  return null;
}

const MARKUP_BYTES = 1024;

/** What begins like a page of markup does to a browser what it says, under any name. */
function markupOf(first: Uint8Array): "html" | "svg" | "xml" | null {
  const begin = decodeStart(first.subarray(0, MARKUP_BYTES))
    .replace(/^\uFEFF?\s*/, "")
    .toLowerCase();
  const afterComments = begin.replace(/^(<\?xml[^>]*\?>\s*|<!--[\s\S]*?-->\s*|<!doctype svg[^>]*>\s*)+/, "");
  if (/^<svg[\s>]/.test(afterComments)) return "svg";
  if (
    /^<(!doctype html|html|head|body|script|iframe|title|meta|style|object|embed|form|a|b|p|div|table|img|h1)[\s>/]/.test(
      afterComments,
    )
  ) {
    return "html";
  }
  return begin.startsWith("<?xml") ? "xml" : null;
}

/** UTF-16 with a byte order mark is read by browsers as well. */
function decodeStart(bytes: Uint8Array): string {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return new TextDecoder("utf-16le").decode(bytes);
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return new TextDecoder("utf-16be").decode(bytes);
  return new TextDecoder("latin1").decode(bytes);
}

const MARKUP = {
  html: { endings: ["html", "htm", "xhtml"], type: "text/html" },
  svg: { endings: ["svg"], type: "image/svg+xml" },
  xml: { endings: ["xml", "svg", "xhtml", "html", "htm", "jdx", "mzml", "gaml", "animl"], type: "application/xml" },
} as const;

function judgeMarkup(kind: keyof typeof MARKUP, ending: string, announcedType: string): FileVerdict {
  const { endings, type } = MARKUP[kind];
  const isNamed = endings.some((each) => each === ending);
  const announced = plainType(announcedType);
  const isAnnounced = announced === type || UNSPECIFIC.has(announced) || (kind === "xml" && announced.endsWith("xml"));
  return isNamed && isAnnounced ? { ok: true, type } : { ok: false, why: "disguised", found: type };
}

const ARCHIVED = ["application/zip"];
/** Content types that a file with this ending may have. */
const TYPES_OF_ENDINGS: Readonly<Record<string, readonly string[]>> = {
  png: ["image/png"],
  jpg: ["image/jpeg"],
  jpeg: ["image/jpeg"],
  gif: ["image/gif"],
  webp: ["image/webp"],
  avif: ["image/avif"],
  heic: ["image/heic", "image/heif"],
  bmp: ["image/bmp"],
  tif: ["image/tiff"],
  tiff: ["image/tiff"],
  pdf: ["application/pdf"],
  zip: ARCHIVED,
  gz: ["application/gzip"],
  xz: ["application/x-xz"],
  bz2: ["application/x-bzip2"],
  "7z": ["application/x-7z-compressed"],
  docx: ["application/vnd.openxmlformats-officedocument.wordprocessingml.document", ...ARCHIVED],
  xlsx: ["application/vnd.openxmlformats-officedocument.spreadsheetml.sheet", ...ARCHIVED],
  pptx: ["application/vnd.openxmlformats-officedocument.presentationml.presentation", ...ARCHIVED],
  odt: ["application/vnd.oasis.opendocument.text", ...ARCHIVED],
  ods: ["application/vnd.oasis.opendocument.spreadsheet", ...ARCHIVED],
  doc: ["application/x-cfb"],
  xls: ["application/x-cfb"],
  mp4: ["video/mp4", "video/x-m4v", "video/quicktime"],
  mov: ["video/quicktime", "video/mp4"],
  webm: ["video/webm", "video/matroska"],
  mp3: ["audio/mpeg"],
  wav: ["audio/wav"],
};

const TEXT_ENDINGS = new Set("txt csv tsv md json log asc dat prn html htm xml svg".split(" "));

/** Said by senders who do not know. */
const UNSPECIFIC = new Set(["", "application/octet-stream", "binary/octet-stream", "application/unknown"]);

/** A sender who names a picture, a PDF or an archive means it; senders' names for the rest differ too much to be held to. */
function contradicts(announced: string, found: string): boolean {
  if (UNSPECIFIC.has(announced) || announced === found) return false;
  const isHeldTo = (type: string) =>
    type.startsWith("image/") || type === "application/pdf" || type.startsWith("text/");
  if (announced === "image/jpg" && found === "image/jpeg") return false;
  return isHeldTo(announced) || isHeldTo(found);
}

function plainType(type: string): string {
  return type.split(";")[0]?.trim().toLowerCase() ?? "";
}
