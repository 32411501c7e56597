/** The part of Eleventy that this project uses; the package has no type declarations of its own. */
declare module '@11ty/eleventy/UserConfig' {
  export default interface UserConfig {
    versionCheck(range: string): void;
    on(event: string, handler: (details: { directories: { output: string } }) => void | Promise<void>): void;
    addGlobalData(name: string, value: unknown): void;
    addWatchTarget(path: string): void;
    addPassthroughCopy(paths: { readonly [from: string]: string }): void;
    addPlugin<Options>(plugin: (config: UserConfig, options?: Options) => void, options?: Options): void;
  }
}

declare module '@11ty/eleventy' {
  export default class Eleventy {
    constructor(input?: string, output?: string, options?: { configPath?: string; quietMode?: boolean });
    setConfigPathOverride?(path: string): void;
    disableLogger(): void;
    init(): Promise<void>;
    write(): Promise<unknown>;
    toJSON(): Promise<{ url: string; outputPath: string; content: string }[]>;
  }
}
