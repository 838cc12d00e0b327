/** Version of this package; a test holds it to package.json. */
export const softwareVersion = '0.1.0';
