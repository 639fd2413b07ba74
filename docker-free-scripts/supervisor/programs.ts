import { accessSync, constants } from 'node:fs';
import path from 'node:path';

/** A program's path; Debian keeps servers where a normal user's PATH does not lead. Throws with a sentence when it is missing. */
export function programPath(name: string): string {
  const folders = [...(process.env.PATH ?? '').split(path.delimiter), '/usr/sbin', '/usr/local/sbin'];
  const found = folders.map((folder) => path.join(folder, name)).find(isProgram);
  if (!found) throw new Error(`The program ${name} is missing; npm start and npm test install it.`);
  return found;
}

function isProgram(file: string): boolean {
  try {
    accessSync(file, constants.X_OK);
    return true;
  } catch {
    return false;
  }
}
