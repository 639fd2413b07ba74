import { spawn } from 'node:child_process';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, onTestFinished, test, vi } from 'vitest';
import { Household } from '#stand-ins/supervisor/household';
import { freePort, needFreePorts } from '#stand-ins/supervisor/ports';
import { scratchFolder } from '#tests/support/scratch-folder';

const SUPERVISOR = fileURLToPath(new URL('../../../docker-free-scripts/supervisor', import.meta.url));
const TSX = import.meta.resolve('tsx');

/** A program that notes its name when it is asked to end. */
function noting(file: string, name: string): string[] {
  return [
    '-c',
    `trap 'echo ${name} >>"${file}"; exit 0' TERM; echo up-${name} >>"${file}"; while :; do sleep 0.05; done`,
  ];
}

async function untilNoted(file: string, ...words: readonly string[]): Promise<void> {
  await vi.waitFor(
    () => {
      const noted = existsSync(file) ? readFileSync(file, 'utf8') : '';
      expect(words.filter((word) => !noted.includes(word))).toEqual([]);
    },
    { timeout: 20_000 },
  );
}

describe('what a start brings up', () => {
  test('at the end · goes in the other order, each when the one before is gone', async () => {
    const notes = path.join(scratchFolder(), 'notes');
    const onLoss = vi.fn();
    const household = new Household(onLoss);
    for (const name of ['database', 'stand-in', 'server']) household.start(name, 'sh', noting(notes, name));
    await untilNoted(notes, 'up-database', 'up-stand-in', 'up-server');
    writeFileSync(notes, '');
    await household.end();
    expect(readFileSync(notes, 'utf8')).toBe('server\nstand-in\ndatabase\n');
    expect(onLoss).not.toHaveBeenCalled();
    expect(() => household.start('late', 'true', [])).toThrow('being stopped');
  });

  test('a program that ends by itself · is told by name', async () => {
    const onLoss = vi.fn();
    const household = new Household(onLoss);
    household.start('The mailbox', 'sh', ['-c', 'exit 0']);
    await vi.waitFor(() => expect(onLoss).toHaveBeenCalledWith('The mailbox'), { timeout: 20_000 });
    await household.end();
  });

  test('a step that fails · is told by name; one under way ends with the rest', async () => {
    const notes = path.join(scratchFolder(), 'notes');
    const household = new Household(() => undefined);
    await expect(household.run('Migrating', 'sh', ['-c', 'exit 3'])).rejects.toThrow('Migrating failed');
    const step = household.run('Seeding', 'sh', ['-c', `echo up >"${notes}"; exec sleep 60`]);
    const failed = expect(step).rejects.toThrow('Seeding failed');
    await untilNoted(notes, 'up');
    await household.end();
    await failed;
  });

  test('a supervisor that is killed outright · leaves no program behind', async () => {
    const folder = scratchFolder();
    const notes = path.join(folder, 'notes');
    const script = path.join(folder, 'supervise.ts');
    const shell = JSON.stringify(noting(notes, 'server'));
    writeFileSync(
      script,
      `import { Household } from ${JSON.stringify(path.join(SUPERVISOR, 'household.ts'))};
       new Household(() => undefined).start('server', 'sh', ${shell});`,
    );
    const supervisor = spawn(process.execPath, ['--conditions=source', '--import', TSX, script], {
      stdio: 'inherit',
    });
    await untilNoted(notes, 'up-server');
    writeFileSync(notes, '');
    supervisor.kill('SIGKILL');
    await untilNoted(notes, 'server');
  });

  test('a port somebody holds · is waited for, then named with the variable to set', async () => {
    const holder = createServer();
    const port = await freePort();
    await new Promise<void>((resolve) => holder.listen(port, '127.0.0.1', resolve));
    onTestFinished(() => {
      holder.close();
    });
    const wanted = [{ variable: 'MAILBOX_PORT', port }];
    await expect(needFreePorts(wanted)).rejects.toThrow(
      `Port ${port} is taken by another program. Stop it, or choose another port: MAILBOX_PORT=`,
    );
    const waiting = needFreePorts(wanted);
    holder.close();
    await expect(waiting).resolves.toBeUndefined();
  });

  test('two programs on one port · are named before anything starts', async () => {
    const port = await freePort();
    await expect(
      needFreePorts([
        { variable: 'PORT', port },
        { variable: 'STRIPE_MOCK_PORT', port },
      ]),
    ).rejects.toThrow(`PORT and STRIPE_MOCK_PORT are both ${port}`);
  });
});
