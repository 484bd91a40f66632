/** What the file chooser offers; other endings may still be chosen or dropped, and the server looks at what is in them. */
export const CHOOSABLE =
  '.csv,.txt,.tsv,.gz,.zip,.xlsx,text/csv,text/tab-separated-values,text/plain,application/gzip,application/zip,application/vnd.openxmlformats-officedocument.spreadsheetml.sheet';

const AS_CSV = 'Export the trend as CSV, or save it as .xlsx.';
const NO_TABLE = 'It holds no trend. Export the trend as CSV.';
/** Endings that say before anything is sent that a file cannot be read, and what to do instead. */
const CANNOT: Readonly<Record<string, string>> = {
  pdf: 'A PDF holds a picture of a table. Export the trend as CSV.',
  xls: 'This is the spreadsheet format from before 2007. Open it and save it as .xlsx or CSV.',
  xlsb: 'Open it in the spreadsheet program and save it as .xlsx or CSV.',
  ods: 'Open it in the spreadsheet program and save it as .xlsx or CSV.',
  numbers: 'Open it in the spreadsheet program and export it as .xlsx or CSV.',
  doc: 'A text document is no trend. Export the trend as CSV.',
  docx: 'A text document is no trend. Export the trend as CSV.',
  ppt: NO_TABLE,
  pptx: NO_TABLE,
  jpg: 'A picture cannot be read. Export the trend as CSV.',
  jpeg: 'A picture cannot be read. Export the trend as CSV.',
  png: 'A picture cannot be read. Export the trend as CSV.',
  gif: 'A picture cannot be read. Export the trend as CSV.',
  rar: 'Unpack it and pack it as .zip, or drop the files themselves.',
  '7z': 'Unpack it and pack it as .zip, or drop the files themselves.',
  tar: 'Unpack it and drop the folder, or pack it as .zip.',
  tgz: 'Unpack it and drop the folder, or pack it as .zip.',
  bak: AS_CSV,
  mdb: AS_CSV,
  accdb: AS_CSV,
  mdf: AS_CSV,
  exe: NO_TABLE,
  dll: NO_TABLE,
  msg: NO_TABLE,
  eml: NO_TABLE,
};

/** Files that computers leave in folders. */
const LITTER = /^(?:\..*|thumbs\.db|desktop\.ini)$/i;

export interface RefusedFile {
  file: File;
  why: string;
}

/** Parts what cannot be a trend from what may be: an empty file, and endings that say so. The others go on without them. */
export function sortOut(files: readonly File[]): { good: File[]; refused: RefusedFile[] } {
  const good: File[] = [];
  const refused: RefusedFile[] = [];
  for (const file of files) {
    const why = whyNot(file);
    if (why === null) good.push(file);
    else refused.push({ file, why });
  }
  return { good, refused };
}

function whyNot({ name, size }: File): string | null {
  const ending = /\.([a-z0-9]+)$/i.exec(name)?.[1]?.toLowerCase() ?? '';
  const cannot = CANNOT[ending];
  if (cannot !== undefined) return cannot;
  if (size === 0) return `"${name}" is empty. Export it again, with at least one row of data.`;
  return null;
}

/** The files of a drop; those of dropped folders too, however deep, without what computers leave in folders. */
export async function droppedFiles(drop: DataTransfer): Promise<File[]> {
  // All entries are asked for at once: after the first wait the drop is empty.
  const items = [...drop.items].filter(({ kind }) => kind === 'file');
  const entries = items.map((item) => item.webkitGetAsEntry());
  if (!entries.some((entry) => entry?.isDirectory === true)) return [...drop.files];
  const plain = items.map((item) => item.getAsFile());
  const found: File[] = [];
  for (const [index, entry] of entries.entries()) {
    const file = plain[index];
    if (entry?.isDirectory === true) found.push(...(await filesIn(entry as FileSystemDirectoryEntry)));
    else if (file) found.push(file);
  }
  return found;
}

async function filesIn(folder: FileSystemDirectoryEntry): Promise<File[]> {
  const entries = (await entriesOf(folder)).filter(({ name }) => !LITTER.test(name));
  entries.sort((a, b) => a.name.localeCompare(b.name, 'en', { numeric: true }));
  const found: File[] = [];
  for (const entry of entries) {
    if (entry.isDirectory) found.push(...(await filesIn(entry as FileSystemDirectoryEntry)));
    else found.push(await new Promise<File>((resolve, reject) => (entry as FileSystemFileEntry).file(resolve, reject)));
  }
  return found;
}

/** A folder hands out its entries a hundred or so at a time. */
async function entriesOf(folder: FileSystemDirectoryEntry): Promise<FileSystemEntry[]> {
  const reader = folder.createReader();
  const all: FileSystemEntry[] = [];
  for (;;) {
    const some = await new Promise<FileSystemEntry[]>((resolve, reject) => reader.readEntries(resolve, reject));
    if (some.length === 0) return all;
    all.push(...some);
  }
}
