/** What a crash prints and a message for a user does not. */
export const STACK = /^\s+at .+:\d+:\d+\)?$|node:internal|Node\.js v\d|\[object Object\]|undefined|TypeError/m;
