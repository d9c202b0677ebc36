/** Version of everything between samples and figures; stored with each analysis, printed in each report. */
export const ENGINE_VERSION = '1.0.0';
