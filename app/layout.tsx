import type { Metadata, Viewport } from "next";
import localFont from "next/font/local";
import { cookies } from "next/headers";
import type { ReactNode } from "react";
import { readThemeChoice, THEME_COOKIE } from "@/components/shell/theme-choice";
import "./globals.css";

const text = localFont({
  src: [
    {
      path: "../node_modules/@fontsource-variable/source-sans-3/files/source-sans-3-latin-wght-normal.woff2",
      weight: "200 900",
      style: "normal",
    },
  ],
  variable: "--font-text",
  display: "swap",
  adjustFontFallback: "Arial",
});

const greek = localFont({
  src: "../node_modules/@fontsource-variable/source-sans-3/files/source-sans-3-greek-wght-normal.woff2",
  weight: "200 900",
  variable: "--font-greek",
  display: "swap",
  adjustFontFallback: false,
});

export const metadata: Metadata = {
  title: { default: "Strandline", template: "%s · Strandline" },
  description: "From site-resolved shots to a light-cone front with honest error bars",
};

export const viewport: Viewport = {
  themeColor: [
    { media: "(prefers-color-scheme: light)", color: "#f8f3e7" },
    { media: "(prefers-color-scheme: dark)", color: "#101829" },
  ],
};

export default async function RootLayout({ children }: { children: ReactNode }) {
  const theme = readThemeChoice((await cookies()).get(THEME_COOKIE)?.value);
  return (
    <html lang="en" data-theme={theme} className={`${text.variable} ${greek.variable}`} suppressHydrationWarning>
      <body>{children}</body>
    </html>
  );
}
