import { createRequire } from 'node:module';

const resolve = createRequire(import.meta.url).resolve;

/**
 * Faces by absolute path: only paths work both for text and for text inside drawings. The packages are runtime
 * dependencies, so they resolve in development, in tests and beside the built server alike.
 */
export const FONTS = {
	'IBM Plex Sans': {
		normal: resolve('@expo-google-fonts/ibm-plex-sans/400Regular/IBMPlexSans_400Regular.ttf'),
		bold: resolve('@expo-google-fonts/ibm-plex-sans/600SemiBold/IBMPlexSans_600SemiBold.ttf'),
		italics: resolve('@expo-google-fonts/ibm-plex-sans/400Regular_Italic/IBMPlexSans_400Regular_Italic.ttf'),
		bolditalics: resolve(
			'@expo-google-fonts/ibm-plex-sans/600SemiBold_Italic/IBMPlexSans_600SemiBold_Italic.ttf'
		)
	},
	'IBM Plex Mono': {
		normal: resolve('@expo-google-fonts/ibm-plex-mono/400Regular/IBMPlexMono_400Regular.ttf'),
		bold: resolve('@expo-google-fonts/ibm-plex-mono/600SemiBold/IBMPlexMono_600SemiBold.ttf'),
		italics: resolve('@expo-google-fonts/ibm-plex-mono/400Regular_Italic/IBMPlexMono_400Regular_Italic.ttf'),
		bolditalics: resolve(
			'@expo-google-fonts/ibm-plex-mono/600SemiBold_Italic/IBMPlexMono_600SemiBold_Italic.ttf'
		)
	}
};

export const FONT_FILES: ReadonlySet<string> = new Set(
	Object.values(FONTS).flatMap((face) => Object.values(face))
);
