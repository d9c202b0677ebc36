/** Version of everything between samples and figures; stored with each analysis, printed in each report. */
export const ENGINE_VERSION = '2.0.0';
