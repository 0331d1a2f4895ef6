/** How a command joins the program. */
import type {Command} from "commander";
import type {Host} from "../nouns.ts";

/**
 * @param create an empty command of this name, wired to the host
 * @param finish receives the exit status of a command that ran to its end
 */
export type AddCommand = (create: (name: string) => Command, host: Host, finish: (status: number) => void) => Command;
