// Which tabs of this browser are open: each holds a lock of its own name for as long as it lives.

/** This tab's mark, the same after a reload; another for a tab that was copied from this one. */
export async function ownTab(session: Storage, locks: LockManager): Promise<string> {
  const known = session.getItem("lagbook tab");
  if (known !== null && await hold(locks, known)) return known;
  const fresh = crypto.randomUUID();
  await hold(locks, fresh);
  session.setItem("lagbook tab", fresh);
  return fresh;
}

/** The marks of the tabs that are open. */
export async function openTabs(locks: LockManager): Promise<ReadonlySet<string>> {
  const { held } = await locks.query();
  return new Set((held ?? []).flatMap(({ name }) => name?.startsWith("lagbook tab ") ? [name.slice("lagbook tab ".length)] : []));
}

function hold(locks: LockManager, tab: string): Promise<boolean> {
  return new Promise((resolve) => {
    void locks.request(`lagbook tab ${tab}`, { ifAvailable: true }, (lock) => {
      resolve(lock !== null);
      // Never resolved: the browser lets go of the lock when the tab ends.
      return lock === null ? undefined : new Promise<void>(() => undefined);
    });
  });
}
