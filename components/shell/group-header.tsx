import Link from "next/link";
import { NavLink } from "./nav-link";
import { ThemeSwitch } from "./theme-switch";
import { Wordmark } from "./wordmark";

interface GroupHeaderProps {
  groupName: string;
  userName: string;
  role: string;
  signOut: () => Promise<void>;
}

/** The head of every group page: name, the rooms, who is signed in. */
export function GroupHeader({ groupName, userName, role, signOut }: GroupHeaderProps) {
  return (
    <header className="border-b border-rule">
      <div className="mx-auto flex w-full max-w-[1680px] flex-wrap items-center gap-x-3.5 gap-y-1 px-4 sm:gap-x-6 py-2 sm:px-7">
        <Link href="/runs" className="no-underline" aria-label="Strandline, to the runs">
          <Wordmark />
        </Link>
        <nav aria-label="Main" className="flex items-center gap-3.5 sm:gap-5">
          <NavLink href="/runs">Runs</NavLink>
          <NavLink href="/account">Account</NavLink>
        </nav>
        <div className="ml-auto flex items-center sm:gap-2">
          <p className="label hidden text-right leading-tight sm:block">
            <span className="text-ink">{groupName}</span>
            <br />
            {userName}, {role}
          </p>
          <ThemeSwitch />
          <form action={signOut}>
            <button type="submit" className="button button-quiet">
              Sign out
            </button>
          </form>
        </div>
      </div>
    </header>
  );
}
