/** Version of this page, put in when it is built. */
declare const __VERSION__: string | undefined;

export const version = typeof __VERSION__ === "string" ? __VERSION__ : "development";
