export interface CommandSettings {
  name: string;
  environment?: NodeJS.ProcessEnv;
  mayFinish?: boolean;
}

export declare function runCommand(command: string, args: string[], settings: CommandSettings): Promise<string>;
export declare function endCommands(): Promise<void>;
