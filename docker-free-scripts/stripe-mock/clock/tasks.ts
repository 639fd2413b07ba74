import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { TaskKind, TaskRecord } from '#stand-ins/stripe-mock/state/records';

/** Puts a task on the one queue from which everything due runs; call inside the transaction that causes it. */
export function schedule(service: Service, kind: TaskKind, subject: string, dueAtMs: number): void {
  service.store.put('tasks', { ...stamp(service, newId('task')), kind, subject, dueAtMs });
  service.wake();
}

/** Takes the tasks of one kind about one subject off the queue. */
export function unschedule(service: Service, kind: TaskKind, subject: string): void {
  for (const task of service.store.all('tasks')) {
    if (task.kind === kind && task.subject === subject) service.store.remove('tasks', task.id);
  }
}

/** The task to run next, if one is due by `untilMs`: the earliest, and among equals the one made first. */
export function nextDue(
  service: Service,
  untilMs: number,
  pick: (task: TaskRecord) => boolean,
): TaskRecord | undefined {
  let first: TaskRecord | undefined;
  for (const task of service.store.all('tasks')) {
    if (task.dueAtMs > untilMs || !pick(task)) continue;
    if (
      first === undefined ||
      task.dueAtMs < first.dueAtMs ||
      (task.dueAtMs === first.dueAtMs && task.seq < first.seq)
    ) {
      first = task;
    }
  }
  return first;
}
