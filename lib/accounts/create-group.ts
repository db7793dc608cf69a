import "server-only";
import type { Executor } from "@/db/transaction";
import { newId } from "@/db/new-id";
import { groups } from "@/db/schema/groups";

/** Makes a group without members and returns its id. */
export async function createGroup(executor: Executor, name: string): Promise<string> {
  const id = newId();
  await executor.insert(groups).values({ id, name, createdAt: new Date() });
  return id;
}
