import { hash, verify } from '@node-rs/argon2';

/** Settings of argon2id: the library's defaults (19 MiB, 2 passes) in service, cheaper ones where tests say so. */
export interface PasswordHashing {
  hash(password: string): Promise<string>;
  /** Takes as long for an account that does not exist as for one that does. */
  matches(stored: string | null, password: string): Promise<boolean>;
}

/** Makes the hashing of passwords; `quick` is for tests only. */
export function passwordHashing(quick: boolean): PasswordHashing {
  const options = quick ? { memoryCost: 1_024, timeCost: 1, parallelism: 1 } : {};
  let decoy: Promise<string> | undefined;
  return {
    hash: (password) => hash(password, options),
    async matches(stored, password) {
      decoy ??= hash('nobody has this password', options);
      const right = await verify(stored ?? (await decoy), password);
      return stored !== null && right;
    },
  };
}
