import {
  type FileHandle,
  mkdir,
  open,
  readdir,
  readFile,
  rename,
  rm,
  stat,
} from 'node:fs/promises';
import { join } from 'node:path';

/** The files of a record, by name. All methods throw what the file system throws. */
export interface RecordFiles {
  readonly path: string;
  /** The folder as the user named it, if that is another name. */
  readonly shown?: string;
  /** All names, sorted. */
  names(): Promise<string[]>;
  read(name: string): Promise<Uint8Array>;
  /**
   * Writes a file that appears all at once and stays: when this returns it survives a crash of the
   * machine. Where it throws, a file of that name from before is as it was.
   */
  write(name: string, bytes: Uint8Array): Promise<void>;
  /** Removes a file, if it is there. */
  remove(name: string): Promise<void>;
}

/** How the hidden files are called that are not yet whole. */
const PARTIAL = '.partial';

/** A record in a folder of the file system. */
export class FolderFiles implements RecordFiles {
  readonly path: string;
  readonly shown: string;

  constructor(path: string, shown = path) {
    this.path = path;
    this.shown = shown;
  }

  /** Makes the folder, unless it is there; returns whether it did. */
  async make(): Promise<boolean> {
    try {
      await mkdir(this.path);
      return true;
    } catch (error) {
      const isFolder = await stat(this.path).then(
        (found) => found.isDirectory(),
        () => false,
      );
      if (!isFolder) throw error;
      return false;
    }
  }

  async names(): Promise<string[]> {
    return (await readdir(this.path)).sort();
  }

  async read(name: string): Promise<Uint8Array> {
    return readFile(join(this.path, name));
  }

  async write(name: string, bytes: Uint8Array): Promise<void> {
    const partial = join(this.path, `.${name}${PARTIAL}`);
    try {
      await withFile(partial, 'w', async (file) => {
        await file.writeFile(bytes);
        await file.sync();
      });
      await rename(partial, join(this.path, name));
    } catch (error) {
      await rm(partial, { force: true });
      // What goes wrong with an open file does not tell which one it is.
      throw Object.assign(error as Error, { path: join(this.path, name) });
    }
    // The new name is in the folder, which is a file of its own to be written.
    await withFile(this.path, 'r', (folder) => folder.sync());
  }

  async remove(name: string): Promise<void> {
    await rm(join(this.path, name), { force: true });
  }
}

/** Whether a name is that of a file that was not finished: what a killed process left. */
export const isPartial = (name: string): boolean => name.startsWith('.') && name.endsWith(PARTIAL);

async function withFile(
  path: string,
  flags: string,
  use: (file: FileHandle) => Promise<void>,
): Promise<void> {
  const file = await open(path, flags);
  try {
    await use(file);
  } finally {
    await file.close();
  }
}
