/** The version that stands in every result; a test holds it to that of package.json. */
export const VERSION = '0.1.0';
